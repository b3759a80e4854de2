// Small dense square matrices of doubles in plain loops.
//
// Why      a blocked product would follow the size of the CPU's caches; these give the same bytes
//          everywhere. Sums run upwards
// Layout   row by row
#ifndef STILLFIELD_MODEL_SQUARE_MATRIX_H_
#define STILLFIELD_MODEL_SQUARE_MATRIX_H_

#include <cstddef>
#include <vector>

namespace stillfield {

struct SquareMatrix {
  SquareMatrix() = default;
  explicit SquareMatrix(int size) : d(size), value(static_cast<std::size_t>(size * size), 0.0) {}
  double& operator()(int r, int c) { return value[static_cast<std::size_t>(r * d + c)]; }
  double operator()(int r, int c) const { return value[static_cast<std::size_t>(r * d + c)]; }
  int d = 0;
  std::vector<double> value;
};

// L with L L' = a; pivots below 1e-12 are taken as that.
SquareMatrix cholesky(const SquareMatrix& a);

// The inverse of a lower triangle.
SquareMatrix lower_inverse(const SquareMatrix& l);

// V'V of a lower triangle V.
SquareMatrix gram(const SquareMatrix& v);

SquareMatrix product(const SquareMatrix& a, const SquareMatrix& b);

// a s a', exactly symmetric, for a symmetric s.
SquareMatrix congruent(const SquareMatrix& a, const SquareMatrix& s);

// Columns of patch_stride(d) floats, the padding zero, as multiply_patch reads them
// (simd/patch_density.h).
std::vector<float> patch_columns(const SquareMatrix& m);

}  // namespace stillfield

#endif  // STILLFIELD_MODEL_SQUARE_MATRIX_H_
