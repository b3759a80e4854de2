// The Gaussian conditional of uneven light given labels and classes, and exact draws from it.
//
// Model    y_s = g(s) mu_k + sd_k e_s,  k = z_s,  e standard normal; g of spline_surface.h
// Prior    c ~ N(1, Q^-1) given mean . c = 1,  Q = R / bend^2 + I / spread^2, R the sum of squared
//          second differences of c along rows and columns (Eilers & Marx 1996). A mean of one over
//          the frame tells g from the class means; as a linear constraint it is kept exactly
// Maths    c | y, z, mu, sd ~ N(A^-1 b, A^-1) given mean . c = 1,
//          A = Q + sum_s (mu_k / sd_k)^2 B_s B_s',  b = Q 1 + sum_s mu_k y_s / sd_k^2 B_s;
//          a draw x of the free Gaussian becomes x - v (mean . x - 1) / (mean . v), v = A^-1 mean
//          (Rue & Held 2005, 2.3.3)
// Bytes    sums of each row in image order, rows added in order, the solve in plain loops
#ifndef STILLFIELD_MODEL_SURFACE_DRAW_H_
#define STILLFIELD_MODEL_SURFACE_DRAW_H_

#include <vector>

#include "model/spline_surface.h"
#include "model/square_matrix.h"
#include "random/stream.h"

namespace stillfield {

struct SurfacePrior {
  double bend = 0.15;   // of second differences of neighbouring coefficients
  double spread = 0.5;  // of coefficients about one
};

// What the pixels of each row add to A and b.
class SurfaceSums {
 public:
  // rows: of all slices.
  SurfaceSums(const SurfaceBasis& basis, int rows);

  // weight = (mu / sd)^2 and value = mu y / sd^2 of each pixel; both 0 where nothing is observed.
  // Different rows may be set at the same time.
  void set_row(int row, const double* weight, const double* value);

  const std::vector<double>& row_sums() const { return sum_; }
  int stride() const { return 5 * basis_->side; }
  const SurfaceBasis& basis() const { return *basis_; }

 private:
  const SurfaceBasis* basis_;
  std::vector<double> sum_;  // a row: sum value B_i, then sum weight B_i B_{i+d} for d = 0..3
};

// The conditional, ready to draw from.
class SurfaceConditional {
 public:
  SurfaceConditional(const SurfaceSums& sums, const SurfacePrior& prior);

  // Under the constraint.
  std::vector<double> mean() const;
  std::vector<double> draw(RandomStream& random) const;

 private:
  void constrain(std::vector<double>& c) const;

  std::vector<double> frame_mean_;
  SquareMatrix lower_inverse_;  // V with A^-1 = V'V
  std::vector<double> free_mean_;
  std::vector<double> shift_;  // v / (mean . v)
};

// Q of the prior.
SquareMatrix surface_precision(int side, const SurfacePrior& prior);

}  // namespace stillfield

#endif  // STILLFIELD_MODEL_SURFACE_DRAW_H_
