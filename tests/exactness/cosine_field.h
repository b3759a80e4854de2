// The smooth field on a grid with 4 neighbours, diagonal in cosines.
//
// Maths    sum over neighbours of (x_s - x_t)^2 = sum_k m_k c_k^2, c = orthonormal DCT-II of x,
//          m_ij = 4 - 2 cos(pi i / W) - 2 cos(pi j / H)  (free boundary; Strang 1999)
//          hence with noise variance v everywhere, given y:
//            c_k ~ N( (c_k of y / v) / (lambda m_k + 1/v), 1 / (lambda m_k + 1/v) ), independent
// Arrays   x fastest; frequencies likewise, constant first
#ifndef STILLFIELD_TESTS_EXACTNESS_COSINE_FIELD_H_
#define STILLFIELD_TESTS_EXACTNESS_COSINE_FIELD_H_

#include <vector>

#include "random/stream.h"

namespace stillfield::exactness {

class CosineField {
 public:
  CosineField(int width, int height);

  // m_k of every frequency.
  const std::vector<double>& eigenvalues() const { return eigenvalue_; }
  std::vector<double> to_cosines(const std::vector<double>& x) const;
  std::vector<double> to_pixels(const std::vector<double>& c) const;
  // Variance of every pixel when the cosines are independent with these variances.
  std::vector<double> pixel_variances(const std::vector<double>& variance) const;

  // A draw of the field with strength lambda; the constant is zero.
  std::vector<double> draw(double lambda, RandomStream& random) const;

 private:
  using Matrix = std::vector<double>;  // [frequency * n + place]
  std::vector<double> apply(const std::vector<double>& in, bool to_pixels, bool squared) const;

  int width_, height_;
  Matrix along_x_, along_y_;
  std::vector<double> eigenvalue_;
};

}  // namespace stillfield::exactness

#endif  // STILLFIELD_TESTS_EXACTNESS_COSINE_FIELD_H_
