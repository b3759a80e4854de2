#include "model/surface_draw.h"

#include <algorithm>
#include <array>

namespace stillfield {
namespace {

double inner(const std::vector<double>& a, const std::vector<double>& b) {
  double sum = 0.0;
  for (std::size_t i = 0; i < a.size(); ++i) sum += a[i] * b[i];
  return sum;
}

// V'w
std::vector<double> transposed_times(const SquareMatrix& v, const std::vector<double>& w) {
  std::vector<double> out(w.size());
  for (int r = 0; r < v.d; ++r) {
    for (int c = 0; c <= r; ++c) {
      out[static_cast<std::size_t>(c)] += v(r, c) * w[static_cast<std::size_t>(r)];
    }
  }
  return out;
}

// A^-1 b = V'(V b)
std::vector<double> solve(const SquareMatrix& v, const std::vector<double>& b) {
  std::vector<double> w(b.size());
  for (int r = 0; r < v.d; ++r) {
    for (int c = 0; c <= r; ++c) {
      w[static_cast<std::size_t>(r)] += v(r, c) * b[static_cast<std::size_t>(c)];
    }
  }
  return transposed_times(v, w);
}

void add_bend(int first, int step, double precision, SquareMatrix& q) {
  constexpr std::array<double, 3> kSecond{1.0, -2.0, 1.0};
  for (int a = 0; a < 3; ++a) {
    for (int b = 0; b < 3; ++b) {
      q(first + a * step, first + b * step) +=
          precision * kSecond[static_cast<std::size_t>(a)] * kSecond[static_cast<std::size_t>(b)];
    }
  }
}

// What one row adds, spread over the splines along y.
void add_row(const SurfaceBasis& basis, int y, const double* sums, SquareMatrix& a,
             std::vector<double>& right) {
  const int side = basis.side;
  const auto row = static_cast<std::size_t>(y);
  const int first = basis.y.first[row];
  const std::array<double, 4>& by = basis.y.value[row];
  for (int p = 0; p < 4; ++p) {
    const double bp = by[static_cast<std::size_t>(p)];
    for (int i = 0; i < side; ++i) {
      right[static_cast<std::size_t>((first + p) * side + i)] += bp * sums[i];
    }
    for (int q = 0; q <= p; ++q) {
      const double weight = bp * by[static_cast<std::size_t>(q)];
      const int r = (first + p) * side, c = (first + q) * side;
      for (int i = 0; i < side; ++i) {
        const double* cross = sums + side + 4 * i;
        a(r + i, c + i) += weight * cross[0];
        for (int d = 1; d < 4 && i + d < side; ++d) {
          a(r + i + d, c + i) += weight * cross[d];
          a(r + i, c + i + d) += weight * cross[d];
        }
      }
    }
  }
}

}  // namespace

SquareMatrix surface_precision(int side, const SurfacePrior& prior) {
  SquareMatrix q(side * side);
  const double bend = 1.0 / (prior.bend * prior.bend);
  for (int i = 0; i < q.d; ++i) q(i, i) = 1.0 / (prior.spread * prior.spread);
  for (int line = 0; line < side; ++line) {
    for (int i = 0; i + 2 < side; ++i) {
      add_bend(line * side + i, 1, bend, q);
      add_bend(i * side + line, side, bend, q);
    }
  }
  return q;
}

SurfaceSums::SurfaceSums(const SurfaceBasis& basis, int rows)
    : basis_(&basis), sum_(static_cast<std::size_t>(rows) * static_cast<std::size_t>(stride())) {}

void SurfaceSums::set_row(int row, const double* weight, const double* value) {
  double* sums = sum_.data() + std::ptrdiff_t{row} * stride();
  std::fill_n(sums, stride(), 0.0);
  const SplineAxis& axis = basis_->x;
  for (std::size_t x = 0; x < axis.first.size(); ++x) {
    if (weight[x] == 0.0) continue;
    const int first = axis.first[x];
    const std::array<double, 4>& b = axis.value[x];
    double* cross = sums + basis_->side + 4 * first;
    for (std::size_t i = 0; i < 4; ++i) {
      sums[static_cast<std::size_t>(first) + i] += value[x] * b[i];
      const double wb = weight[x] * b[i];
      for (std::size_t d = 0; i + d < 4; ++d) cross[4 * i + d] += wb * b[i + d];
    }
  }
}

SurfaceConditional::SurfaceConditional(const SurfaceSums& sums, const SurfacePrior& prior)
    : frame_mean_(sums.basis().mean) {
  const SurfaceBasis& basis = sums.basis();
  SquareMatrix a = surface_precision(basis.side, prior);
  // Second differences of c = 1 are 0: Q 1 is what the spread alone gives.
  std::vector<double> right(static_cast<std::size_t>(a.d), 1.0 / (prior.spread * prior.spread));
  const int rows = static_cast<int>(sums.row_sums().size()) / sums.stride();
  for (int row = 0; row < rows; ++row) {
    add_row(basis, row % basis.extent.height,
            sums.row_sums().data() + std::ptrdiff_t{row} * sums.stride(), a, right);
  }
  lower_inverse_ = lower_inverse(cholesky(a));  // which reads the lower triangle alone
  free_mean_ = solve(lower_inverse_, right);
  shift_ = solve(lower_inverse_, frame_mean_);
  const double scale = inner(frame_mean_, shift_);
  for (double& s : shift_) s /= scale;
}

void SurfaceConditional::constrain(std::vector<double>& c) const {
  const double excess = inner(frame_mean_, c) - 1.0;
  for (std::size_t i = 0; i < c.size(); ++i) c[i] -= shift_[i] * excess;
}

std::vector<double> SurfaceConditional::mean() const {
  std::vector<double> c = free_mean_;
  constrain(c);
  return c;
}

std::vector<double> SurfaceConditional::draw(RandomStream& random) const {
  std::vector<double> z(free_mean_.size());
  for (double& e : z) e = random.normal();
  std::vector<double> c = transposed_times(lower_inverse_, z);
  for (std::size_t i = 0; i < c.size(); ++i) c[i] += free_mean_[i];
  constrain(c);
  return c;
}

}  // namespace stillfield
