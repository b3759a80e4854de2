#include "model/patch_tables.h"

#include <algorithm>
#include <cmath>

#include "core/elementary.h"
#include "simd/patch_density.h"
#include "simd/patch_group.h"

namespace stillfield {
namespace {

constexpr double kPriorRidge = 1e-3;
constexpr double kLargestPriorVariance = 1e4;

// Dense d x d matrices of doubles in plain loops: the bytes must not depend on cache sizes.
struct Matrix {
  explicit Matrix(int size) : d(size), value(static_cast<std::size_t>(size) * size, 0.0) {}
  double& operator()(int r, int c) { return value[static_cast<std::size_t>(r * d + c)]; }
  double operator()(int r, int c) const { return value[static_cast<std::size_t>(r * d + c)]; }
  int d;
  std::vector<double> value;
};

Matrix cholesky(const Matrix& a) {
  Matrix l(a.d);
  for (int r = 0; r < a.d; ++r) {
    for (int c = 0; c <= r; ++c) {
      double s = a(r, c);
      for (int k = 0; k < c; ++k) s -= l(r, k) * l(c, k);
      l(r, c) = r == c ? std::sqrt(std::max(s, 1e-12)) : s / l(c, c);
    }
  }
  return l;
}

Matrix lower_inverse(const Matrix& l) {
  Matrix v(l.d);
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

// V'V of a lower triangle V.
Matrix gram(const Matrix& v) {
  Matrix out(v.d);
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

// scale (I - (I + step * a)^-1)
Matrix saturated(const Matrix& a, double step, double scale) {
  Matrix s(a.d);
  for (int r = 0; r < a.d; ++r) {
    for (int c = 0; c < a.d; ++c) s(r, c) = step * a(r, c) + (r == c ? 1.0 : 0.0);
  }
  Matrix out = gram(lower_inverse(cholesky(s)));
  for (int r = 0; r < a.d; ++r) {
    for (int c = 0; c < a.d; ++c) out(r, c) = scale * ((r == c ? 1.0 : 0.0) - out(r, c));
  }
  return out;
}

void fill_density(const Matrix& covariance, double weight, ComponentTables& t) {
  const int d = covariance.d;
  Matrix s = covariance;
  for (int i = 0; i < d; ++i) s(i, i) += 1.0;
  const Matrix l = cholesky(s);
  const Matrix h = lower_inverse(l);
  double constant = exact_log(weight);
  for (int i = 0; i < d; ++i) constant -= exact_log(l(i, i));
  t.constant = static_cast<float>(constant);
  t.row_blocks.assign(static_cast<std::size_t>(row_block_start(d / 4)), 0.0f);
  for (int r = 0; r < d; ++r) {
    float* block = t.row_blocks.data() + row_block_start(r / 4);
    for (int c = 0; c <= r; ++c) block[4 * c + r % 4] = static_cast<float>(h(r, c));
  }
}

std::vector<float> columns_of(const Matrix& m) {
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

void fill_conditional(const Matrix& covariance, ComponentTables& t) {
  const int d = covariance.d;
  const Matrix gain = saturated(covariance, 1.0, 1.0);
  t.gain = columns_of(gain);
  t.draw = columns_of(cholesky(gain));
  t.variance.assign(static_cast<std::size_t>(patch_stride(d)), 1.0f);
  t.precision = t.variance;
  for (int i = 0; i < d; ++i) {
    const double v = std::max(gain(i, i), 1e-6);
    t.variance[static_cast<std::size_t>(i)] = static_cast<float>(v);
    t.precision[static_cast<std::size_t>(i)] = static_cast<float>(1.0 / v);
  }
  const Matrix prior = saturated(covariance, 1.0 / kLargestPriorVariance, kLargestPriorVariance);
  t.group_prior.assign(static_cast<std::size_t>(triangle_elements(d)), 0.0f);
  for (int r = 0; r < d; ++r) {
    for (int c = 0; c <= r; ++c) {
      const double a = kGroupPriorDegrees * (prior(r, c) + (r == c ? kPriorRidge : 0.0));
      t.group_prior[static_cast<std::size_t>(triangle_at(r, c))] = static_cast<float>(a);
    }
  }
}

}  // namespace

PatchTables make_patch_tables(const PatchMixture& mixture, double noise_sd, double centre,
                              TableParts parts, const Pool& pool) {
  PatchTables tables;
  tables.side = mixture.side;
  tables.centre = centre;
  tables.noise_sd = noise_sd;
  tables.components.resize(mixture.components.size());
  const int d = mixture.elements();
  pool.for_each(mixture.size(), [&](int k) {
    const PatchComponent& component = mixture.components[static_cast<std::size_t>(k)];
    ComponentTables& t = tables.components[static_cast<std::size_t>(k)];
    t.mean.assign(static_cast<std::size_t>(patch_stride(d)), 0.0f);
    Matrix covariance(d);
    for (int i = 0; i < d * d; ++i) {
      const auto at = static_cast<std::size_t>(i);
      covariance.value[at] = component.covariance[at] / (noise_sd * noise_sd);
    }
    for (int i = 0; i < d; ++i) {
      const auto at = static_cast<std::size_t>(i);
      t.mean[at] = static_cast<float>((component.mean[at] - centre) / noise_sd);
    }
    fill_density(covariance, component.weight, t);
    if (parts == TableParts::kAll) fill_conditional(covariance, t);
  });
  return tables;
}

}  // namespace stillfield
