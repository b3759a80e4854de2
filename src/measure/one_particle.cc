#include "measure/one_particle.h"

#include <cmath>
#include <map>
#include <string>

namespace stillfield {
namespace {

constexpr std::size_t kMostLeftOut = 200;  // particles that are left out in turn

// Variances by name of measurement.
std::map<std::string, double> class_variances(const std::vector<Particle>& all, double scale) {
  std::vector<Particle> inside;
  for (const Particle& p : all) {
    if (p.weight > 0) inside.push_back(p);
  }
  std::map<std::string, double> variance;
  if (inside.empty()) return variance;
  const ParticleSizes sizes = particle_sizes(inside);
  const double weight = sizes.count / static_cast<double>(inside.size());
  variance["particle_count"] = 0.25 * weight * weight;
  if (inside.size() < 2) return variance;
  const std::size_t step = (inside.size() + kMostLeftOut - 1) / kMostLeftOut;
  double area = 0, d10 = 0, d50 = 0, d90 = 0, times = 0;
  for (std::size_t i = 0; i < inside.size(); i += step) {
    const double kept = inside[i].weight;
    inside[i].weight = 0;
    const ParticleSizes less = particle_sizes(inside);
    inside[i].weight = kept;
    const auto squared = [](double x) { return x * x; };
    area += squared(less.mean_area - sizes.mean_area);
    d10 += squared(less.d10 - sizes.d10);
    d50 += squared(less.d50 - sizes.d50);
    d90 += squared(less.d90 - sizes.d90);
    times += 1;
  }
  const double per_length = 0.25 / times * scale * scale;
  variance["mean_particle_area"] = per_length * scale * scale * area;
  variance["d10"] = per_length * d10;
  variance["d50"] = per_length * d50;
  variance["d90"] = per_length * d90;
  return variance;
}

}  // namespace

std::vector<double> one_particle_variances(View<const std::uint8_t> labels,
                                           View<const std::uint8_t> usable,
                                           const LabelMeasureSettings& settings) {
  const double scale = settings.pixel_size_um > 0 ? settings.pixel_size_um : 1.0;
  std::vector<std::map<std::string, double>> of_class;
  for (int k = 1; k <= settings.classes; ++k) {
    of_class.push_back(
        class_variances(find_particles(labels, k, usable, settings.particles).list, scale));
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
