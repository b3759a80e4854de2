#include "diagnose/residual_correlation.h"

#include <algorithm>
#include <array>
#include <cmath>
#include <limits>

namespace stillfield {
namespace {

constexpr int kSide = kCorrelationBlock;
constexpr int kPixels = kSide * kSide;
using Block = std::array<double, kPixels>;

// Residual of the least-squares plane. On a full square the constant and the two slopes are
// orthogonal.
Block without_plane(const Block& in) {
  const double middle = 0.5 * (kSide - 1);
  double sum = 0.0, along_x = 0.0, along_y = 0.0, square = 0.0;
  for (int i = 0; i < kPixels; ++i) {
    const double x = i % kSide - middle, y = i / kSide - middle;
    const double v = in[static_cast<std::size_t>(i)];
    sum += v;
    along_x += x * v;
    along_y += y * v;
    square += x * x;
  }
  Block out;
  for (int i = 0; i < kPixels; ++i) {
    const double x = i % kSide - middle, y = i / kSide - middle;
    out[static_cast<std::size_t>(i)] =
        in[static_cast<std::size_t>(i)] - sum / kPixels - (along_x * x + along_y * y) / square;
  }
  return out;
}

double norm_of(const Block& b) {
  double sum = 0.0;
  for (const double v : b) sum += v * v;
  return sum;
}

// Sum of the products of pixels `lag` apart.
double product_sum(const Block& b, int dx, int dy) {
  double sum = 0.0;
  for (int y = std::max(0, -dy); y < kSide - std::max(0, dy); ++y) {
    for (int x = std::max(0, -dx); x < kSide - std::max(0, dx); ++x) {
      sum += b[static_cast<std::size_t>(y * kSide + x)] *
             b[static_cast<std::size_t>((y + dy) * kSide + x + dx)];
    }
  }
  return sum;
}

double pairs_of(int dx, int dy) {
  return static_cast<double>((kSide - std::abs(dx)) * (kSide - std::abs(dy)));
}

// What fitting a plane to white noise of unit variance takes off the sum of products: the trace of
// the fit's projection shifted by the lag, minus u' S u summed over its three unit vectors u.
double plane_share(int dx, int dy) {
  const double middle = 0.5 * (kSide - 1);
  double share = 0.0;
  for (int k = 0; k < 3; ++k) {
    Block u;
    for (int i = 0; i < kPixels; ++i) {
      u[static_cast<std::size_t>(i)] = k == 0 ? 1.0 : (k == 1 ? i % kSide : i / kSide) - middle;
    }
    share += product_sum(u, dx, dy) / norm_of(u);
  }
  return share;
}

std::vector<Block> quiet_blocks(View<const float> image, View<const std::uint8_t> usable) {
  std::vector<Block> all;
  std::vector<double> norms;
  for (int z = 0; z < image.depth(); ++z) {
    for (int top = 0; top + kSide <= image.height(); top += kSide) {
      for (int left = 0; left + kSide <= image.width(); left += kSide) {
        Block b;
        bool whole = true;
        for (int i = 0; i < kPixels; ++i) {
          whole = whole && usable.at(left + i % kSide, top + i / kSide, z) != 0;
          b[static_cast<std::size_t>(i)] = image.at(left + i % kSide, top + i / kSide, z);
        }
        if (!whole) continue;
        all.push_back(without_plane(b));
        norms.push_back(norm_of(all.back()));
      }
    }
  }
  if (static_cast<int>(all.size()) < kFewestBlocksForTest) return {};
  std::vector<double> sorted = norms;
  std::sort(sorted.begin(), sorted.end());
  const auto count =
      std::max<std::size_t>(static_cast<std::size_t>(kQuietShare * static_cast<double>(all.size())),
                            kFewestBlocksForTest);
  std::vector<Block> quiet;
  for (std::size_t i = 0; i < all.size(); ++i) {
    if (norms[i] <= sorted[count - 1] && norms[i] > 0.0) quiet.push_back(all[i]);
  }
  return quiet;
}

NoiseCorrelation empty_correlation(int reach) {
  NoiseCorrelation c;
  c.reach = reach;
  c.rho.assign(static_cast<std::size_t>((2 * reach + 1) * (2 * reach + 1)), 0.0);
  c.error = c.rho;
  c.rho[c.index(0, 0)] = 1.0;
  return c;
}

void judge(NoiseCorrelation& c) {
  constexpr std::array<std::array<int, 2>, 4> kLags = {{{1, 0}, {0, 1}, {1, 1}, {-1, 1}}};
  double worst = 0.0, largest = 0.0;
  for (const auto& lag : kLags) {
    const double r = std::fabs(c.at(lag[0], lag[1]));
    worst = std::max(worst, r / c.error[c.index(lag[0], lag[1])]);
    largest = std::max(largest, r);
  }
  c.p_value = std::min(1.0, 4.0 * std::erfc(worst / std::sqrt(2.0)));
  c.correlated = c.p_value < kCorrelationLevel && largest > kLeastCorrelation;
  if (c.correlated) c.sentence = "noise is correlated between neighbours: intervals are too narrow";
}

}  // namespace

NoiseCorrelation noise_correlation(View<const float> image, View<const std::uint8_t> usable,
                                   int reach) {
  NoiseCorrelation c = empty_correlation(reach);
  const std::vector<Block> blocks = quiet_blocks(image, usable);
  if (static_cast<int>(blocks.size()) < kFewestBlocksForTest) {
    c.p_value = std::numeric_limits<double>::quiet_NaN();
    return c;
  }
  const auto n = static_cast<double>(blocks.size());
  double square = 0.0;
  for (const Block& b : blocks) square += norm_of(b);
  square /= n * (kPixels - 3);
  for (int dy = -reach; dy <= reach; ++dy) {
    for (int dx = -reach; dx <= reach; ++dx) {
      if (dx == 0 && dy == 0) continue;
      double sum = 0.0;
      for (const Block& b : blocks) sum += product_sum(b, dx, dy);
      const double pairs = n * pairs_of(dx, dy);
      c.rho[c.index(dx, dy)] = sum / (square * pairs) + plane_share(dx, dy) / pairs_of(dx, dy);
      c.error[c.index(dx, dy)] = 1.0 / std::sqrt(pairs);
    }
  }
  judge(c);
  return c;
}

NoiseCorrelation residual_autocorrelation(View<const float> standardised,
                                          View<const std::uint8_t> usable, int reach) {
  NoiseCorrelation c = empty_correlation(reach);
  const Extent& e = standardised.extent();
  const auto sum_at = [&](int dx, int dy, double& pairs) {
    double sum = 0.0;
    pairs = 0.0;
    for (int z = 0; z < e.depth; ++z) {
      for (int y = std::max(0, -dy); y < e.height - std::max(0, dy); ++y) {
        for (int x = std::max(0, -dx); x < e.width - std::max(0, dx); ++x) {
          if (usable.at(x, y, z) == 0 || usable.at(x + dx, y + dy, z) == 0) continue;
          sum += static_cast<double>(standardised.at(x, y, z)) * standardised.at(x + dx, y + dy, z);
          pairs += 1.0;
        }
      }
    }
    return sum;
  };
  double pixels = 0.0;
  const double square = sum_at(0, 0, pixels) / std::max(pixels, 1.0);
  for (int dy = -reach; dy <= reach; ++dy) {
    for (int dx = -reach; dx <= reach; ++dx) {
      if (dx == 0 && dy == 0) continue;
      double pairs = 0.0;
      const double sum = sum_at(dx, dy, pairs);
      if (!(pairs > 0.0) || !(square > 0.0)) continue;
      c.rho[c.index(dx, dy)] = sum / (pairs * square);
      c.error[c.index(dx, dy)] = 1.0 / std::sqrt(pairs);
    }
  }
  c.p_value = std::numeric_limits<double>::quiet_NaN();
  return c;
}

}  // namespace stillfield
