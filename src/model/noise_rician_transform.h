// Variance-stabilising transform of Rician noise, tabulated.
//
// Maths    y = sd |s + n1 + i n2|; with m(s) = E y / sd and v(s) = Var y / sd^2 (noise_rician.h)
// the
//          transform's slope in y / sd is 1 / sqrt(v) where m(s) = y / sd (delta method; the idea
//          of stabilising Rician data: Foi 2011), constant below m(0). point_inverse inverts E[f(y)
//          | s], integrated numerically on a grid of s: x = sd s >= 0.
// Units    z has no unit, its sd is about 1; x and y in grey units
// Accuracy sd of z between 0.9 and 1.07, see tests/model/noise_rician_transform_test.cc
// Ranges   sd > 0
#ifndef STILLFIELD_MODEL_NOISE_RICIAN_TRANSFORM_H_
#define STILLFIELD_MODEL_NOISE_RICIAN_TRANSFORM_H_

#include <vector>

#include "model/noise_transform.h"

namespace stillfield {

class RicianTransform : public VarianceTransform {
 public:
  explicit RicianTransform(double sd);

  double forward(double y) const override;
  double point_inverse(double z) const override;
  double slope(double z) const override;
  double sd() const override { return 1.0; }

 private:
  double stabilised(double r) const;  // of y / sd

  double scale_;
  // The grid of s, m(s), f(m(s)) and E f.
  std::vector<double> signal_, mean_, value_, expected_;
};

}  // namespace stillfield

#endif  // STILLFIELD_MODEL_NOISE_RICIAN_TRANSFORM_H_
