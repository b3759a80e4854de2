#include "job/recheck.h"

#include <algorithm>
#include <cmath>
#include <vector>

#include "random/counters.h"
#include "random/normal.h"

namespace stillfield {
namespace {

constexpr double kNormal90 = 1.6448536269514722;  // 95 % quantile of the standard normal
constexpr int kRowsPerTask = 16;

Volume<float> with_noise(const Volume<float>& truth, double noise_sd, std::uint32_t run,
                         PhiloxKey key, const Pool& pool) {
  Volume<float> noisy(truth.extent());
  const std::uint32_t word3 = counter_word3(Purpose::kRecheck, 0, 0);
  const auto sd = static_cast<float>(noise_sd);
  pool.for_bands(truth.height(), kRowsPerTask, [&](int first, int last) {
    for (int y = first; y < last; ++y) {
      for (int x = 0; x < truth.width(); ++x) {
        const std::uint32_t word = pixel_word(key, static_cast<std::uint32_t>(y),
                                              static_cast<std::uint32_t>(x), run, word3);
        noisy.at(x, y) = truth.at(x, y) + sd * standard_normal(word);
      }
    }
  });
  return noisy;
}

double needed_factor(const Volume<float>& truth, const IntensityMoments& found) {
  std::vector<double> ratio;
  for (int y = 0; y < truth.height(); ++y) {
    for (int x = 0; x < truth.width(); ++x) {
      const double sd = std::sqrt(double{found.variance.at(x, y)});
      if (sd > 0) ratio.push_back(std::fabs(double{found.mean.at(x, y)} - truth.at(x, y)) / sd);
    }
  }
  if (ratio.empty()) return 1.0;
  const auto at =
      ratio.begin() + static_cast<std::ptrdiff_t>(0.9 * static_cast<double>(ratio.size()));
  std::nth_element(ratio.begin(), at, ratio.end());
  return *at / kNormal90;
}

}  // namespace

double recheck_factor(const Volume<float>& mean, const Volume<float>& draw, double noise_sd,
                      PhiloxKey key, const Pool& pool, const RestoreAgain& restore) {
  const double a = needed_factor(mean, restore(with_noise(mean, noise_sd, 1, key, pool), 1));
  const double b = needed_factor(draw, restore(with_noise(draw, noise_sd, 2, key, pool), 2));
  return std::sqrt(a * b);
}

}  // namespace stillfield
