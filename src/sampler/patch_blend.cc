#include "sampler/patch_blend.h"

#include <Eigen/Dense>
#include <algorithm>
#include <cmath>

#include "random/counters.h"
#include "random/normal.h"

namespace stillfield {
namespace {

constexpr double kSplit = 0.5;  // a: the restorations see noise 1.12 times as strong
constexpr int kRowsPerTask = 16;
constexpr double kLeastWeight = 1e-6;

}  // namespace

SplitNoise split_noise(const Volume<float>& value, double noise_sd, PhiloxKey key,
                       const Pool& pool) {
  SplitNoise split{Volume<float>(value.extent(), value.view().offset()),
                   Volume<float>(value.extent(), value.view().offset()),
                   noise_sd * std::sqrt(1 + kSplit * kSplit)};
  const std::uint32_t word3 = counter_word3(Purpose::kSplitNoise, 0, 0);
  const Offset origin = value.view().offset();
  pool.for_bands(value.height(), kRowsPerTask, [&](int first, int last) {
    for (int y = first; y < last; ++y) {
      for (int x = 0; x < value.width(); ++x) {
        const std::uint32_t word = pixel_word(key, static_cast<std::uint32_t>(origin.y + y),
                                              static_cast<std::uint32_t>(origin.x + x), 0, word3);
        const double noise = noise_sd * double{standard_normal(word)};
        const double y0 = value.at(x, y);
        split.restored_from.at(x, y) = static_cast<float>(y0 + kSplit * noise);
        split.judged_by.at(x, y) = static_cast<float>(y0 - noise / kSplit);
      }
    }
  });
  return split;
}

std::vector<double> blend_weights(const std::vector<Volume<float>>& restorations,
                                  const SplitNoise& split, const Volume<float>& given,
                                  const Volume<float>& usable) {
  const std::size_t n = restorations.size();
  std::vector<double> quadratic(n * n), row(n * n), error(n);
  for (int y = 0; y < given.height(); ++y) {
    std::fill(row.begin(), row.end(), 0.0);
    for (int x = 0; x < given.width(); ++x) {
      if (usable.at(x, y) != given.at(x, y)) continue;
      for (std::size_t i = 0; i < n; ++i) {
        error[i] = double{restorations[i].at(x, y)} - double{split.judged_by.at(x, y)};
      }
      for (std::size_t i = 0; i < n; ++i) {
        for (std::size_t j = 0; j < n; ++j) row[i * n + j] += error[i] * error[j];
      }
    }
    for (std::size_t i = 0; i < n * n; ++i) quadratic[i] += row[i];
  }
  return simplex_minimiser(quadratic, static_cast<int>(n));
}

std::vector<double> simplex_minimiser(const std::vector<double>& quadratic, int n) {
  const auto at = [&](int i, int j) { return quadratic[static_cast<std::size_t>(i * n + j)]; };
  std::vector<double> best(static_cast<std::size_t>(n), 1.0 / n);
  double least = std::numeric_limits<double>::infinity();
  for (unsigned support = 1; support < 1U << n; ++support) {
    std::vector<int> index;
    for (int i = 0; i < n; ++i) {
      if (support >> i & 1U) index.push_back(i);
    }
    // Stationary on the support: differences of A w between members vanish. Written as
    // u' D u - 2 c' u with u the weights of all members but the first, so that the large constant
    // common to all products cancels before anything is solved.
    const int m = static_cast<int>(index.size()) - 1;
    const int base = index.front();
    Eigen::MatrixXd d(m, m);
    Eigen::VectorXd c(m);
    for (int i = 0; i < m; ++i) {
      const int p = index[static_cast<std::size_t>(i) + 1];
      c(i) = at(base, base) - at(base, p);
      for (int j = 0; j < m; ++j) {
        const int q = index[static_cast<std::size_t>(j) + 1];
        d(i, j) = at(base, base) - at(base, p) - at(base, q) + at(p, q);
      }
    }
    std::vector<double> w(static_cast<std::size_t>(n), 0.0);
    double rest = 1.0, value = at(base, base);
    if (m > 0) {
      const Eigen::VectorXd u = d.ldlt().solve(c);
      bool inside = u.allFinite();
      for (int i = 0; i < m; ++i) {
        inside = inside && u(i) >= kLeastWeight;
        w[static_cast<std::size_t>(index[static_cast<std::size_t>(i) + 1])] = u(i);
        rest -= u(i);
        value -= c(i) * u(i);
      }
      if (!inside || rest < kLeastWeight) continue;
    }
    w[static_cast<std::size_t>(base)] = rest;
    if (value < least) {
      least = value;
      best = w;
    }
  }
  return best;
}

IntensityMoments blend(const std::vector<IntensityMoments>& restorations,
                       const std::vector<double>& weights, const Pool& pool) {
  const Extent e = restorations.front().mean.extent();
  IntensityMoments out{Volume<float>(e), Volume<float>(e)};
  pool.for_bands(e.height, kRowsPerTask, [&](int first, int last) {
    for (int y = first; y < last; ++y) {
      for (int x = 0; x < e.width; ++x) {
        double mean = 0, variance = 0;
        for (std::size_t i = 0; i < weights.size(); ++i) {
          mean += weights[i] * double{restorations[i].mean.at(x, y)};
        }
        for (std::size_t i = 0; i < weights.size(); ++i) {
          const double off = double{restorations[i].mean.at(x, y)} - mean;
          variance += weights[i] * (double{restorations[i].variance.at(x, y)} + off * off);
        }
        out.mean.at(x, y) = static_cast<float>(mean);
        out.variance.at(x, y) = static_cast<float>(variance);
      }
    }
  });
  return out;
}

}  // namespace stillfield
