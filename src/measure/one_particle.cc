#include "measure/one_particle.h"

#include <algorithm>
#include <cmath>
#include <map>
#include <string>

namespace stillfield {
namespace {

constexpr std::size_t kMostLeftOut = 200;  // particles that are left out in turn

double squared(double x) {
  return x * x;
}

// Sums of squared changes of sizes.
struct Changes {
  double area = 0, d10 = 0, d50 = 0, d90 = 0, times = 0;

  void add(const ParticleSizes& from, const ParticleSizes& to) {
    area += squared(to.mean_area - from.mean_area);
    d10 += squared(to.d10 - from.d10);
    d50 += squared(to.d50 - from.d50);
    d90 += squared(to.d90 - from.d90);
    times += 1;
  }
};

// By name of measurement.
std::map<std::string, double> class_variances(const std::vector<Particle>& all, double least_area,
                                              double scale) {
  std::vector<Particle> inside;
  double doubtful = 0;
  for (const Particle& p : all) {
    if (!(p.weight > 0)) continue;
    inside.push_back(p);
    if (static_cast<double>(p.area) < 2 * least_area) doubtful += p.weight;
  }
  std::map<std::string, double> variance;
  if (inside.empty()) return variance;
  const ParticleSizes sizes = particle_sizes(inside);
  const double weight = sizes.count / static_cast<double>(inside.size());
  variance["particle_count"] = weight * (0.25 * weight + doubtful);

  Changes out, in;
  const std::size_t step = (inside.size() + kMostLeftOut - 1) / kMostLeftOut;
  for (std::size_t i = 0; inside.size() > 1 && i < inside.size(); i += step) {
    const double kept = inside[i].weight;
    inside[i].weight = 0;
    out.add(sizes, particle_sizes(inside));
    inside[i].weight = kept;
  }
  Particle small = inside.front();
  small.area = std::max<std::int64_t>(1, static_cast<std::int64_t>(std::ceil(least_area)));
  small.weight = weight;
  inside.push_back(small);
  in.add(sizes, particle_sizes(inside));
  const auto change = [&](double Changes::*size, double unit) {
    const double of_out = out.times > 0 ? out.*size / out.times : in.*size;
    return 0.5 * (of_out + in.*size) * squared(unit);
  };
  variance["mean_particle_area"] = change(&Changes::area, scale * scale);
  variance["d10"] = change(&Changes::d10, scale);
  variance["d50"] = change(&Changes::d50, scale);
  variance["d90"] = change(&Changes::d90, scale);
  return variance;
}

}  // namespace

std::vector<double> one_particle_variances(View<const std::uint8_t> labels,
                                           View<const std::uint8_t> usable,
                                           const LabelMeasureSettings& settings,
                                           const std::vector<double>& least_area) {
  const double scale = settings.pixel_size_um > 0 ? settings.pixel_size_um : 1.0;
  std::vector<std::map<std::string, double>> of_class;
  for (int k = 1; k <= settings.classes; ++k) {
    of_class.push_back(class_variances(find_particles(labels, k, usable, settings.particles).list,
                                       least_area[static_cast<std::size_t>(k - 1)], scale));
  }
  std::vector<double> variances;
  for (const MeasureKey& key : measure_keys(settings)) {
    const std::map<std::string, double>& found = of_class[static_cast<std::size_t>(key.label - 1)];
    const auto it = found.find(key.name);
    variances.push_back(it == found.end() ? 0.0 : it->second);
  }
  return variances;
}

}  // namespace stillfield
