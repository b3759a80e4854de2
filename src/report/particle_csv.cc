#include "report/particle_csv.h"

#include "report/csv.h"

namespace stillfield {
namespace {

constexpr char kHeader[] =
    "image,page,class,particle,x_px,y_px,unit,area,area_mean,area_lower90,area_upper90,"
    "equivalent_diameter,mean_intensity,probability,on_border,weight";

}  // namespace

std::string particles_csv(const InputFacts& input, double pixel_size_um,
                          std::span<const ParticleRow> rows) {
  const bool scaled = pixel_size_um > 0;
  const double length = scaled ? pixel_size_um : 1.0;
  const double square = length * length;
  CsvTable table(kHeader);
  for (const ParticleRow& row : rows) {
    const auto area = static_cast<double>(row.particle.area);
    table.start_row();
    table.add(input.path);
    table.add(std::int64_t{input.page});
    table.add(std::int64_t{row.label});
    table.add(std::int64_t{row.particle.component});
    table.add(row.particle.x);
    table.add(row.particle.y);
    table.add(scaled ? "um" : "px");
    for (const double value : {area, row.area_mean, row.area_lower90, row.area_upper90}) {
      table.add(value * square);
    }
    table.add(equivalent_diameter(area) * length);
    table.add(row.mean_intensity);
    table.add(row.probability);
    table.add(std::int64_t{row.particle.on_border});
    table.add(row.particle.weight);
  }
  return table.text();
}

std::string particles_header() {
  return std::string(kHeader) + '\n';
}

std::string_view particle_rows(std::string_view table) {
  const std::size_t end_of_header = table.find('\n');
  return end_of_header == std::string_view::npos ? std::string_view()
                                                 : table.substr(end_of_header + 1);
}

}  // namespace stillfield
