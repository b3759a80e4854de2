#include "model/square_matrix.h"

#include <algorithm>
#include <cmath>

#include "simd/patch_density.h"

namespace stillfield {

SquareMatrix cholesky(const SquareMatrix& a) {
  SquareMatrix l(a.d);
  for (int r = 0; r < a.d; ++r) {
    for (int c = 0; c <= r; ++c) {
      double s = a(r, c);
      for (int k = 0; k < c; ++k) s -= l(r, k) * l(c, k);
      l(r, c) = r == c ? std::sqrt(std::max(s, 1e-12)) : s / l(c, c);
    }
  }
  return l;
}

SquareMatrix lower_inverse(const SquareMatrix& l) {
  SquareMatrix v(l.d);
  for (int c = 0; c < l.d; ++c) {
    v(c, c) = 1.0 / l(c, c);
    for (int r = c + 1; r < l.d; ++r) {
      double s = 0.0;
      for (int k = c; k < r; ++k) s += l(r, k) * v(k, c);
      v(r, c) = -s / l(r, r);
    }
  }
  return v;
}

SquareMatrix gram(const SquareMatrix& v) {
  SquareMatrix out(v.d);
  for (int k = 0; k < v.d; ++k) {
    for (int r = 0; r <= k; ++r) {
      for (int c = 0; c <= r; ++c) out(r, c) += v(k, r) * v(k, c);
    }
  }
  for (int r = 0; r < v.d; ++r) {
    for (int c = 0; c < r; ++c) out(c, r) = out(r, c);
  }
  return out;
}

SquareMatrix product(const SquareMatrix& a, const SquareMatrix& b) {
  SquareMatrix out(a.d);
  for (int r = 0; r < a.d; ++r) {
    for (int k = 0; k < a.d; ++k) {
      for (int c = 0; c < a.d; ++c) out(r, c) += a(r, k) * b(k, c);
    }
  }
  return out;
}

SquareMatrix congruent(const SquareMatrix& a, const SquareMatrix& s) {
  const SquareMatrix left = product(a, s);
  SquareMatrix out(a.d);
  for (int r = 0; r < a.d; ++r) {
    for (int c = 0; c <= r; ++c) {
      double sum = 0.0;
      for (int k = 0; k < a.d; ++k) sum += left(r, k) * a(c, k);
      out(r, c) = sum;
      out(c, r) = sum;
    }
  }
  return out;
}

std::vector<float> patch_columns(const SquareMatrix& m) {
  const auto stride = static_cast<std::size_t>(patch_stride(m.d));
  std::vector<float> out(stride * static_cast<std::size_t>(m.d), 0.0f);
  for (int r = 0; r < m.d; ++r) {
    for (int c = 0; c < m.d; ++c) {
      out[static_cast<std::size_t>(c) * stride + static_cast<std::size_t>(r)] =
          static_cast<float>(m(r, c));
    }
  }
  return out;
}

}  // namespace stillfield
