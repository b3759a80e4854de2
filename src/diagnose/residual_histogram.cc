#include "diagnose/residual_histogram.h"

#include <algorithm>
#include <cmath>
#include <limits>

#include "diagnose/normal_probability.h"

namespace stillfield {
namespace {

constexpr double kFirstEdge = -4.0;

// Of a residual up to e, when values are rounded to grey levels and limited to their range.
double rounded_probability(double e, const GreyLevels& grey, double mean, double sd) {
  const double level = std::floor((mean + sd * e - grey.origin) / grey.step);
  if (level < 0) return 0.0;
  if (level >= grey.levels - 1) return 1.0;
  return normal_probability((grey.origin + grey.step * (level + 0.5) - mean) / sd);
}

}  // namespace

ResidualHistogram::ResidualHistogram(int classes)
    : counts_(static_cast<std::size_t>(classes) * (kEdges + 1)),
      pixels_(static_cast<std::size_t>(classes)) {}

void ResidualHistogram::add(const ResidualBlock& block) {
  for (std::size_t i = 0; i < ResidualBlock::kPixels; ++i) {
    if (block.inner[i] == 0) continue;
    const double e = block.residual[i];
    // The first edge that is not below e.
    const double edge = std::ceil((e - kFirstEdge) * kBinsPerSd);
    const auto bin = static_cast<std::size_t>(std::clamp(edge, 0.0, double{kEdges}));
    const auto k = static_cast<std::size_t>(block.inner[i] - 1);
    ++counts_[k * (kEdges + 1) + bin];
    ++pixels_[k];
    ++all_;
    far_ += std::fabs(e) > kFarResidual ? 1 : 0;
  }
}

HistogramDistance ResidualHistogram::distance(const GreyLevels& grey,
                                              const GaussianClasses& classes) const {
  HistogramDistance worst;
  for (std::size_t k = 0; k < pixels_.size(); ++k) {
    if (pixels_[k] == 0) continue;
    const auto n = static_cast<double>(pixels_[k]);
    std::int64_t below = 0;
    double largest = 0;
    for (int j = 0; j < kEdges; ++j) {
      below += counts_[k * (kEdges + 1) + static_cast<std::size_t>(j)];
      const double expected =
          rounded_probability(kFirstEdge + j / kBinsPerSd, grey, classes.mean[k], classes.sd[k]);
      largest = std::max(largest, std::fabs(static_cast<double>(below) / n - expected));
    }
    const double weighted = largest * std::sqrt(n / static_cast<double>(all_));
    if (weighted > worst.distance) worst = {weighted, static_cast<int>(k) + 1};
  }
  if (all_ == 0) worst.distance = std::numeric_limits<double>::quiet_NaN();
  return worst;
}

double ResidualHistogram::far_share() const {
  return static_cast<double>(far_) / static_cast<double>(all_);
}

}  // namespace stillfield
