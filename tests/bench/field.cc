#include "bench/field.h"

#include <algorithm>
#include <cmath>

#include "random/stream.h"
#include "simd/label_statistics.h"

namespace stillfield::bench {
namespace {

constexpr int kLevels = 256;

double phase_mean(int k, int classes) {
  return kLevels * (k + 0.5) / classes;
}
double noise(int classes) {
  return 0.5 * kLevels / classes;
}

}  // namespace

GreyLevels make_image(int size, int classes) {
  GreyLevels g;
  g.level = Volume<std::uint16_t>({size, size});
  g.levels = kLevels;
  g.histogram.assign(kLevels, 1);
  g.observed = std::int64_t{size} * size;
  RandomStream random({1, 2}, Purpose::kSimulation);
  for (int y = 0; y < size; ++y) {
    for (int x = 0; x < size; ++x) {
      const double v =
          phase_mean((x / 37 + y / 53) % classes, classes) + noise(classes) * random.normal();
      g.level.at(x, y) = static_cast<std::uint16_t>(std::clamp(v, 0.0, kLevels - 1.0));
    }
  }
  return g;
}

LabelModel make_model(int classes) {
  LabelModel m;
  m.prior.alpha.assign(static_cast<std::size_t>(classes), 0.0);
  m.prior.beta = 0.7;
  for (int k = 0; k < classes; ++k) {
    m.classes.mean.push_back(phase_mean(k, classes));
    m.classes.sd.push_back(noise(classes));
  }
  return m;
}

Field::Field(int size, int classes, Connectivity connectivity, const Pool& pool)
    : grey(make_image(size, classes)),
      colouring({size, size}, make_neighbourhood(connectivity)),
      observed(observe(colouring, grey)),
      visits(colouring.plane_elements() * static_cast<std::size_t>(classes - 1)),
      count(visits.size()) {
  chain.key = {1, 2};
  chain.model = make_model(classes);
  chain.labels = guarded_labels(colouring);
  RandomStream random({3, 4}, Purpose::kStart);
  Volume<std::uint8_t> start({size, size});
  for (int y = 0; y < size; ++y) {
    for (int x = 0; x < size; ++x) {
      start.at(x, y) = static_cast<std::uint8_t>(random.word() % static_cast<unsigned>(classes));
    }
  }
  scatter_labels(colouring, start.view(), chain.labels);
  prepare_weights(observed, chain.model, pool, weights);
}

void Field::sweep(int sweeps, bool counting, const Pool& pool) {
  if (counting) std::swap(chain.visits, visits);
  sweep_labels(colouring, weights, sweeps, Purpose::kLabels, pool, chain);
  if (counting) std::swap(chain.visits, visits);
}

void Field::empty_counts() {
  empty_visits(visits.size(), visits.data(), count.data());
}

double Field::bytes_touched(bool counting) const {
  const auto n = static_cast<double>(weights.value.size() * sizeof(float)) +
                 2.0 * static_cast<double>(chain.labels.size());
  return counting ? n + 2.0 * static_cast<double>(visits.size()) : n;
}

}  // namespace stillfield::bench
