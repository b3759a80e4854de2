#include "model/surface_start.h"

#include <algorithm>
#include <array>
#include <cmath>
#include <limits>

#include "core/elementary.h"
#include "model/mixture_em.h"

namespace stillfield {
namespace {

constexpr int kCoarse = 128;
constexpr int kSmallSide = 32;  // images up to here are taken pixel by pixel
constexpr int kTiles = 8;
constexpr int kIterations = 40;
constexpr std::array<int, 3> kRamps{1, 10, 25};  // rounds until the coupling is reached
constexpr double kCoupling = 1.2;                // of neighbouring blocks
constexpr int kBins = 512;
constexpr double kTileNoise = 0.05;  // of the light that tiles show, relative

// Block averages, NaN where nothing is observed, and the splines at the centres of the blocks.
struct Coarse {
  SurfaceBasis basis;
  Volume<double> value;
};

Coarse coarse_image(const GreyLevels& grey, const SurfaceBasis& basis) {
  const Extent e = grey.level.extent();
  const int side = std::max(e.width, e.height);
  const int block = side <= kSmallSide ? 1 : std::max(2, (side + kCoarse - 1) / kCoarse);
  Coarse coarse;
  coarse.value = Volume<double>({(e.width + block - 1) / block, (e.height + block - 1) / block});
  coarse.basis = basis;
  coarse.basis.extent = coarse.value.extent();
  const auto thin = [block](const SplineAxis& axis, int blocks) {
    SplineAxis out;
    out.splines = axis.splines;
    const int pixels = static_cast<int>(axis.first.size());
    for (int b = 0; b < blocks; ++b) {
      const auto centre = static_cast<std::size_t>(std::min(b * block + block / 2, pixels - 1));
      out.first.push_back(axis.first[centre]);
      out.value.push_back(axis.value[centre]);
    }
    return out;
  };
  coarse.basis.x = thin(basis.x, coarse.value.width());
  coarse.basis.y = thin(basis.y, coarse.value.height());
  for (int v = 0; v < coarse.value.height(); ++v) {
    for (int u = 0; u < coarse.value.width(); ++u) {
      std::int64_t sum = 0, count = 0;
      for (int y = v * block; y < std::min((v + 1) * block, e.height); ++y) {
        for (int x = u * block; x < std::min((u + 1) * block, e.width); ++x) {
          const std::uint16_t level = grey.level.at(x, y);
          if (level == grey.missing()) continue;
          sum += level;
          ++count;
        }
      }
      coarse.value.at(u, v) = count == 0 ? std::numeric_limits<double>::quiet_NaN()
                                         : grey.origin + grey.step * static_cast<double>(sum) /
                                                             static_cast<double>(count);
    }
  }
  return coarse;
}

// Calls visit(x, y, value, light) for every block that has a value.
template <class Visit>
void for_blocks(const Coarse& coarse, const std::vector<double>& surface, const Visit& visit) {
  for (int y = 0; y < coarse.value.height(); ++y) {
    const SurfaceRow light(coarse.basis, surface, y);
    for (int x = 0; x < coarse.value.width(); ++x) {
      const double v = coarse.value.at(x, y);
      if (!std::isnan(v)) visit(x, y, v, light.at(x));
    }
  }
}

// The surface through one value of each tile; `pick` chooses it from the tile's sorted values.
template <class Pick>
std::vector<double> through_tiles(const Coarse& coarse, const SurfacePrior& prior,
                                  const Pick& pick) {
  const int width = coarse.value.width(), height = coarse.value.height();
  Volume<double> tile({kTiles, kTiles});
  double sum = 0.0;
  int tiles = 0;
  for (int j = 0; j < kTiles; ++j) {
    for (int i = 0; i < kTiles; ++i) {
      std::vector<double> values;
      for (int y = j * height / kTiles; y < (j + 1) * height / kTiles; ++y) {
        for (int x = i * width / kTiles; x < (i + 1) * width / kTiles; ++x) {
          if (!std::isnan(coarse.value.at(x, y))) values.push_back(coarse.value.at(x, y));
        }
      }
      std::sort(values.begin(), values.end());
      tile.at(i, j) = values.empty() ? std::numeric_limits<double>::quiet_NaN() : pick(values);
      if (values.empty()) continue;
      sum += tile.at(i, j);
      ++tiles;
    }
  }
  const double mean = sum / tiles;
  SurfaceSums sums(coarse.basis, height);
  std::vector<double> weight(static_cast<std::size_t>(width)), value(weight.size());
  for (int y = 0; y < height; ++y) {
    for (int x = 0; x < width; ++x) {
      const double t = tile.at(std::min(kTiles - 1, x * kTiles / width),
                               std::min(kTiles - 1, y * kTiles / height));
      const auto i = static_cast<std::size_t>(x);
      weight[i] = std::isnan(t) ? 0.0 : 1.0 / (kTileNoise * kTileNoise);
      value[i] = std::isnan(t) ? 0.0 : weight[i] * t / mean;
    }
    sums.set_row(y, weight.data(), value.data());
  }
  return SurfaceConditional(sums, prior).mean();
}

struct Fit {
  std::vector<double> surface;
  std::vector<double> mean;
  double variance = 1.0;
  std::vector<Volume<double>> belonging;  // of each class: probability of each block
  double score = -std::numeric_limits<double>::infinity();
};

// Classes of the blocks divided by the surface.
Fit open_fit(const Coarse& coarse, std::vector<double> surface, int classes) {
  double low = std::numeric_limits<double>::infinity(), high = -low;
  for_blocks(coarse, surface, [&](int, int, double v, double g) {
    low = std::min(low, v / std::max(g, kLeastLight));
    high = std::max(high, v / std::max(g, kLeastLight));
  });
  std::vector<double> count(kBins), sum(kBins);
  const double width = std::max((high - low) / kBins, 1e-12);
  for_blocks(coarse, surface, [&](int, int, double v, double g) {
    const double u = v / std::max(g, kLeastLight);
    const auto b = static_cast<std::size_t>(std::clamp((u - low) / width, 0.0, kBins - 1.0));
    count[b] += 1.0;
    sum[b] += u;
  });
  GreyHistogram histogram;
  histogram.step = width;
  for (std::size_t b = 0; b < count.size(); ++b) {
    if (count[b] == 0.0) continue;
    histogram.value.push_back(sum[b] / count[b]);
    histogram.weight.push_back(count[b]);
  }
  const Mixture mixture = fit_mixture(histogram, classes, true);
  Fit fit{std::move(surface),
          mixture.classes.mean,
          mixture.classes.sd.front() * mixture.classes.sd.front(),
          {}};
  for (int k = 0; k < classes; ++k) fit.belonging.emplace_back(coarse.value.extent());
  return fit;
}

double penalty(const std::vector<double>& surface, const SurfaceBasis& basis,
               const SurfacePrior& prior) {
  const SquareMatrix q = surface_precision(basis.side, prior);
  double sum = 0.0;
  for (int r = 0; r < q.d; ++r) {
    for (int c = 0; c < q.d; ++c) {
      sum += (surface[static_cast<std::size_t>(r)] - 1.0) * q(r, c) *
             (surface[static_cast<std::size_t>(c)] - 1.0);
    }
  }
  return 0.5 * sum;
}

// Sum over the four neighbours' probabilities of class k.
double around(const Volume<double>& belonging, int x, int y) {
  double sum = 0.0;
  if (x > 0) sum += belonging.at(x - 1, y);
  if (x + 1 < belonging.width()) sum += belonging.at(x + 1, y);
  if (y > 0) sum += belonging.at(x, y - 1);
  if (y + 1 < belonging.height()) sum += belonging.at(x, y + 1);
  return sum;
}

// Probabilities of all blocks, one after the other; the score is the pseudo-likelihood given the
// neighbours' probabilities.
void expect(const Coarse& coarse, const SurfacePrior& prior, double coupling, Fit& fit) {
  const std::size_t classes = fit.mean.size();
  std::vector<double> r(classes);
  fit.score = -penalty(fit.surface, coarse.basis, prior);
  for_blocks(coarse, fit.surface, [&](int x, int y, double v, double g) {
    double top = -std::numeric_limits<double>::infinity(), total = 0.0, weights = 0.0;
    for (std::size_t k = 0; k < classes; ++k) {
      const double d = v - g * fit.mean[k];
      const double tie = coupling * around(fit.belonging[k], x, y);
      weights += exact_exp(tie);
      r[k] = tie - 0.5 * d * d / fit.variance;
      top = std::max(top, r[k]);
    }
    for (double& p : r) total += p = exact_exp(p - top);
    fit.score += top + exact_log(total) - exact_log(weights) - 0.5 * exact_log(fit.variance);
    for (std::size_t k = 0; k < classes; ++k) fit.belonging[k].at(x, y) = r[k] / total;
  });
}

// Classes and surface given the probabilities.
void maximise(const Coarse& coarse, const SurfacePrior& prior, Fit& fit) {
  const std::size_t classes = fit.mean.size();
  std::vector<double> n(classes), gv(classes), gg(classes);
  for_blocks(coarse, fit.surface, [&](int x, int y, double v, double g) {
    for (std::size_t k = 0; k < classes; ++k) {
      const double p = fit.belonging[k].at(x, y);
      n[k] += p;
      gv[k] += p * g * v;
      gg[k] += p * g * g;
    }
  });
  double all = 0.0, squares = 0.0;
  for (std::size_t k = 0; k < classes; ++k) {
    if (gg[k] > 0.0) fit.mean[k] = gv[k] / gg[k];
    all += n[k];
  }
  const int width = coarse.value.width();
  SurfaceSums sums(coarse.basis, coarse.value.height());
  std::vector<double> weight(static_cast<std::size_t>(width)), value(weight.size());
  for (int y = 0; y < coarse.value.height(); ++y) {
    const SurfaceRow light(coarse.basis, fit.surface, y);
    for (int x = 0; x < width; ++x) {
      const double v = coarse.value.at(x, y);
      const auto i = static_cast<std::size_t>(x);
      weight[i] = value[i] = 0.0;
      if (std::isnan(v)) continue;
      for (std::size_t k = 0; k < classes; ++k) {
        const double p = fit.belonging[k].at(x, y);
        const double d = v - light.at(x) * fit.mean[k];
        squares += p * d * d;
        weight[i] += p * fit.mean[k] * fit.mean[k] / fit.variance;
        value[i] += p * fit.mean[k] * v / fit.variance;
      }
    }
    sums.set_row(y, weight.data(), value.data());
  }
  fit.surface = SurfaceConditional(sums, prior).mean();
  fit.variance = std::max(squares / all, fit.variance * 1e-3);
}

}  // namespace

SurfaceStart start_surface(const GreyLevels& grey, const SurfaceBasis& basis,
                           const SurfacePrior& prior, int classes) {
  const Coarse coarse = coarse_image(grey, basis);
  std::vector<std::vector<double>> starts{
      std::vector<double>(static_cast<std::size_t>(basis.unknowns()), 1.0)};
  for (const double share : {0.1, 0.5, 0.9}) {
    starts.push_back(through_tiles(coarse, prior, [share](const std::vector<double>& sorted) {
      return sorted[static_cast<std::size_t>(share * static_cast<double>(sorted.size() - 1))];
    }));
  }
  starts.push_back(through_tiles(coarse, prior, [](const std::vector<double>& sorted) {
    double sum = 0.0;
    for (const double v : sorted) sum += v;
    return sum / static_cast<double>(sorted.size());
  }));
  Fit best;
  for (const std::vector<double>& start : starts) {
    for (const int ramp : kRamps) {
      Fit fit = open_fit(coarse, start, classes);
      for (int i = 0; i < kIterations; ++i) {
        expect(coarse, prior, kCoupling * std::min(1.0, static_cast<double>(i) / ramp), fit);
        maximise(coarse, prior, fit);
      }
      expect(coarse, prior, kCoupling, fit);
      if (fit.score > best.score || best.surface.empty()) best = std::move(fit);
    }
  }
  double low = std::numeric_limits<double>::infinity(), high = -low;
  for_blocks(coarse, best.surface, [&](int, int, double, double g) {
    low = std::min(low, g);
    high = std::max(high, g);
  });
  return {std::move(best.surface), high - low};
}

Volume<float> even_light(View<const float> pixels, const SurfaceBasis& basis,
                         const std::vector<double>& coefficients) {
  Volume<float> even(pixels.extent());
  for (int z = 0; z < pixels.depth(); ++z) {
    for (int y = 0; y < pixels.height(); ++y) {
      const SurfaceRow light(basis, coefficients, y);
      for (int x = 0; x < pixels.width(); ++x) {
        even.at(x, y, z) =
            static_cast<float>(pixels.at(x, y, z) / std::max(light.at(x), kLeastLight));
      }
    }
  }
  return even;
}

}  // namespace stillfield
