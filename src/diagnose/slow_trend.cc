#include "diagnose/slow_trend.h"

#include <algorithm>
#include <limits>

#include "model/square_matrix.h"

namespace stillfield {
namespace {

// From -1 at the first of n pixels to 1 at the last.
double place(int i, int n) {
  return n > 1 ? 2.0 * i / (n - 1) - 1.0 : 0.0;
}

}  // namespace

void SlowTrend::add(const ResidualBlock& block) {
  for (int v = 0; v < block.height; ++v) {
    const double y = place(block.y + v, extent_.height);
    for (int u = 0; u < block.width; ++u) {
      const auto i = static_cast<std::size_t>(v * kResidualBlock + u);
      if (block.inner[i] == 0) continue;
      const double x = place(block.x + u, extent_.width);
      const double e = block.residual[i];
      const std::array<double, kTerms> term = {1.0, x, y, x * x, x * y, y * y};
      for (std::size_t r = 0; r < kTerms; ++r) {
        for (std::size_t c = 0; c <= r; ++c) normal_[r][c] += term[r] * term[c];
        right_[r] += term[r] * e;
      }
      square_ += e * e;
    }
  }
}

double SlowTrend::share() const {
  constexpr double kFewest = 10;
  const double n = normal_[0][0];
  if (n < kFewest) return std::numeric_limits<double>::quiet_NaN();
  SquareMatrix a(kTerms);
  for (int r = 0; r < a.d; ++r) {
    for (int c = 0; c < a.d; ++c) {
      a(r, c) = normal_[static_cast<std::size_t>(std::max(r, c))]
                       [static_cast<std::size_t>(std::min(r, c))] /
                n;
    }
  }
  // With L L' = a and L w = right, the fit explains w'w; its first term is the mean's.
  const SquareMatrix inverse = lower_inverse(cholesky(a));
  double explained = 0;
  for (int r = 1; r < a.d; ++r) {
    double w = 0;
    for (int c = 0; c <= r; ++c) w += inverse(r, c) * right_[static_cast<std::size_t>(c)] / n;
    explained += w * w;
  }
  const double mean = right_[0] / n;
  return explained / (square_ / n - mean * mean);
}

}  // namespace stillfield
