// Does brightness drift across the image within classes?
//
// A surface c0 + c1 x + c2 y + c3 x^2 + c4 x y + c5 y^2 is fitted to the inner residuals by least
// squares (x and y from -1 to 1 over the image).
//   share    of their sum of squares about the mean that the surface explains, 0 to 1: for white
//            noise 5 / n on average; a drift of r noise deviations (rms) gives r^2 / (1 + r^2)
// NaN      with fewer than ten inner pixels
#ifndef STILLFIELD_DIAGNOSE_SLOW_TREND_H_
#define STILLFIELD_DIAGNOSE_SLOW_TREND_H_

#include <array>

#include "diagnose/residual_block.h"

namespace stillfield {

class SlowTrend {
 public:
  explicit SlowTrend(const Extent& extent) : extent_(extent) {}
  void add(const ResidualBlock& block);
  double share() const;

 private:
  static constexpr std::size_t kTerms = 6;

  Extent extent_;
  std::array<std::array<double, kTerms>, kTerms> normal_{};  // lower triangle
  std::array<double, kTerms> right_{};
  double square_ = 0;
};

}  // namespace stillfield

#endif  // STILLFIELD_DIAGNOSE_SLOW_TREND_H_
