#include "measure/label_measures.h"

#include <array>
#include <cmath>

#include "measure/interface_length.h"

namespace stillfield {
namespace {

constexpr std::array<const char*, 8> kNames{
    "area_fraction", "interface_length", "particle_count", "mean_particle_area", "d10", "d50",
    "d90",           "mean_intensity"};

struct ClassTotals {
  std::int64_t pixels = 0;
  std::int64_t observed = 0;
  double intensity = 0;  // per row, added in row order
};

std::vector<ClassTotals> class_totals(View<const std::uint8_t> labels, View<const float> grey,
                                      View<const std::uint8_t> usable, int classes) {
  const bool all = usable.extent().sites() == 0;
  std::vector<ClassTotals> totals(static_cast<std::size_t>(classes));
  std::vector<double> row(totals.size());
  for (int y = 0; y < labels.height(); ++y) {
    row.assign(row.size(), 0.0);
    for (int x = 0; x < labels.width(); ++x) {
      if (!all && usable.at(x, y) == 0) continue;
      const auto k = static_cast<std::size_t>(labels.at(x, y) - 1);
      ++totals[k].pixels;
      const float value = grey.at(x, y);
      if (!std::isfinite(value)) continue;
      ++totals[k].observed;
      row[k] += double{value};
    }
    for (std::size_t k = 0; k < row.size(); ++k) totals[k].intensity += row[k];
  }
  return totals;
}

}  // namespace

std::vector<MeasureKey> measure_keys(const LabelMeasureSettings& settings) {
  const bool scaled = settings.pixel_size_um > 0;
  const std::string length = scaled ? "um" : "px";
  const std::string area = length + "^2";
  const std::array<std::string, kNames.size()> units{"1",    length, "1",    area,
                                                     length, length, length, "grey value"};
  std::vector<MeasureKey> keys;
  for (int k = 1; k <= settings.classes; ++k) {
    for (std::size_t i = 0; i < kNames.size(); ++i) keys.push_back({kNames[i], k, units[i]});
  }
  return keys;
}

std::vector<double> measure_labels(View<const std::uint8_t> labels, View<const float> grey,
                                   View<const std::uint8_t> usable,
                                   const LabelMeasureSettings& settings,
                                   const ParticleVisit& visit) {
  const double scale = settings.pixel_size_um > 0 ? settings.pixel_size_um : 1.0;
  const std::vector<ClassTotals> totals = class_totals(labels, grey, usable, settings.classes);
  double pixels = 0;
  for (const ClassTotals& t : totals) pixels += static_cast<double>(t.pixels);
  std::vector<double> values;
  for (int k = 1; k <= settings.classes; ++k) {
    const ClassTotals& t = totals[static_cast<std::size_t>(k - 1)];
    const Particles particles = find_particles(labels, k, usable, settings.particles);
    if (visit) visit(k, particles);
    const ParticleSizes sizes = particle_sizes(particles.list);
    values.push_back(static_cast<double>(t.pixels) / pixels);
    values.push_back(interface_length(labels, k, usable) * scale);
    values.push_back(sizes.count);
    values.push_back(sizes.mean_area * scale * scale);
    values.push_back(sizes.d10 * scale);
    values.push_back(sizes.d50 * scale);
    values.push_back(sizes.d90 * scale);
    values.push_back(t.observed > 0 ? t.intensity / static_cast<double>(t.observed)
                                    : std::numeric_limits<double>::quiet_NaN());
  }
  return values;
}

}  // namespace stillfield
