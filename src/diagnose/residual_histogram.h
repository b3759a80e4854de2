// Do the residuals within classes follow the normal distribution?
//
//   distance    D_k = max over bin edges |F_k(e) - P(residual <= e)|, F_k the share of the class's
//               inner pixels: the Kolmogorov-Smirnov distance on edges 1/32 apart from -4 to 4,
//               against the normal distribution rounded to the image's grey levels and limited to
//               their range. Reported is max_k D_k sqrt(n_k / n), so that chance moves every class
//               alike, and the class that reaches it
//   far_share   share of inner pixels beyond kFarResidual standard deviations (normal: 6.3e-5)
// NaN      without an inner pixel
#ifndef STILLFIELD_DIAGNOSE_RESIDUAL_HISTOGRAM_H_
#define STILLFIELD_DIAGNOSE_RESIDUAL_HISTOGRAM_H_

#include <cstdint>
#include <vector>

#include "diagnose/residual_block.h"

namespace stillfield {

inline constexpr double kFarResidual = 4.0;

struct HistogramDistance {
  double distance = 0;
  int label = 0;  // class 1..K
};

class ResidualHistogram {
 public:
  explicit ResidualHistogram(int classes);
  void add(const ResidualBlock& block);

  HistogramDistance distance(const GreyLevels& grey, const GaussianClasses& classes) const;
  double far_share() const;
  std::int64_t pixels() const { return all_; }  // inner ones

 private:
  static constexpr int kEdges = 257;  // bin 0 lies below the first, bin kEdges above the last
  static constexpr double kBinsPerSd = 32;

  std::vector<std::int64_t> counts_;  // kEdges + 1 a class
  std::vector<std::int64_t> pixels_;
  std::int64_t far_ = 0, all_ = 0;
};

}  // namespace stillfield

#endif  // STILLFIELD_DIAGNOSE_RESIDUAL_HISTOGRAM_H_
