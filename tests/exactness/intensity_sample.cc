#include "exactness/intensity_sample.h"

namespace stillfield::exactness {
namespace {

Volume<float> as_plane(const std::vector<double>& x, int width, int height) {
  Volume<float> plane({width, height});
  for (std::size_t s = 0; s < x.size(); ++s) {
    const int at = static_cast<int>(s);
    plane.at(at % width, at / width) = static_cast<float>(x[s]);
  }
  return plane;
}

ObservedIntensity observe_problem(const IntensityProblem& p, const IntensityLayout& layout) {
  return observe_intensity(layout, as_plane(p.value, p.width, p.height).view(),
                           as_plane(p.variance, p.width, p.height).view());
}

}  // namespace

IntensitySample::IntensitySample(const IntensityProblem& p, PhiloxKey key, double strength,
                                 double noise_variance)
    : model(p.model),
      layout({p.width, p.height}, make_neighbourhood(p.connectivity)),
      observed(observe_problem(p, layout)),
      chain(start_intensity_chain(
          observed, model.prior, key,
          as_plane(std::vector<double>(p.value.size(), observed.centre), p.width, p.height).view(),
          strength, noise_variance)) {}

void IntensitySample::sweep() {
  sweep_intensity(observed, model.prior, observed.value, pool, chain);
}

void IntensitySample::draw_parameters() {
  draw_intensity_parameters(observed, model, pool, chain);
}

std::vector<double> IntensitySample::pixels() const {
  std::vector<double> x(static_cast<std::size_t>(layout.extent().sites()));
  layout.for_each_pixel([&](std::size_t at, int px, int py, int) {
    x[static_cast<std::size_t>(py * layout.extent().width + px)] =
        observed.centre + static_cast<double>(chain.field[at]);
  });
  return x;
}

double IntensitySample::differences() {
  return sum_differences(observed, model.prior, pool, chain);
}

double IntensitySample::residuals() {
  return sum_residuals(observed, model.prior, pool, chain);
}

PixelMoments sample_pixels(IntensitySample& sample, const std::vector<double>& about, int sweeps,
                           int batch) {
  PixelMoments m{std::vector<BatchMeans>(about.size(), BatchMeans(batch)),
                 std::vector<BatchMeans>(about.size(), BatchMeans(batch))};
  for (int i = 0; i < batch; ++i) sample.sweep();
  for (int i = 0; i < sweeps; ++i) {
    sample.sweep();
    const std::vector<double> x = sample.pixels();
    for (std::size_t s = 0; s < x.size(); ++s) {
      m.mean[s].add(x[s]);
      m.square[s].add((x[s] - about[s]) * (x[s] - about[s]));
    }
  }
  return m;
}

}  // namespace stillfield::exactness
