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

// scale (I - (I + step * a)^-1)
SquareMatrix saturated(const SquareMatrix& a, double step, double scale) {
  SquareMatrix s(a.d);
  for (int r = 0; r < a.d; ++r) {
    for (int c = 0; c < a.d; ++c) s(r, c) = step * a(r, c) + (r == c ? 1.0 : 0.0);
  }
  SquareMatrix out = gram(lower_inverse(cholesky(s)));
  for (int r = 0; r < a.d; ++r) {
    for (int c = 0; c < a.d; ++c) out(r, c) = scale * ((r == c ? 1.0 : 0.0) - out(r, c));
  }
  return out;
}

// noise: null when white.
void fill_density(const SquareMatrix& covariance, double weight, const PatchNoise* noise,
                  ComponentTables& t) {
  const int d = covariance.d;
  SquareMatrix s = covariance;
  if (noise) {
    for (std::size_t i = 0; i < s.value.size(); ++i) s.value[i] += noise->covariance.value[i];
  } else {
    for (int i = 0; i < d; ++i) s(i, i) += 1.0;
  }
  const SquareMatrix l = cholesky(s);
  const SquareMatrix h = lower_inverse(l);
  double constant = exact_log(weight);
  for (int i = 0; i < d; ++i) constant -= exact_log(l(i, i));
  t.constant = static_cast<float>(constant);
  t.row_blocks.assign(static_cast<std::size_t>(row_block_start(d / 4)), 0.0f);
  for (int r = 0; r < d; ++r) {
    float* block = t.row_blocks.data() + row_block_start(r / 4);
    for (int c = 0; c <= r; ++c) block[4 * c + r % 4] = static_cast<float>(h(r, c));
  }
}

// noise: null when white.
void fill_conditional(const SquareMatrix& covariance, const PatchNoise* noise, ComponentTables& t) {
  const int d = covariance.d;
  const SquareMatrix whitened = noise ? congruent(noise->whiten, covariance) : covariance;
  const SquareMatrix gain = saturated(whitened, 1.0, 1.0);
  const SquareMatrix posterior = noise ? congruent(noise->colour, gain) : gain;
  t.gain = patch_columns(noise ? product(product(noise->colour, gain), noise->whiten) : gain);
  t.draw = patch_columns(cholesky(posterior));
  t.variance.assign(static_cast<std::size_t>(patch_stride(d)), 1.0f);
  t.precision = t.variance;
  for (int i = 0; i < d; ++i) {
    const double v = std::max(posterior(i, i), 1e-6);
    t.variance[static_cast<std::size_t>(i)] = static_cast<float>(v);
    t.precision[static_cast<std::size_t>(i)] = static_cast<float>(1.0 / v);
  }
  const SquareMatrix prior =
      saturated(whitened, 1.0 / kLargestPriorVariance, kLargestPriorVariance);
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
                              TableParts parts, const Pool& pool, const PatchNoise* noise) {
  PatchTables tables;
  tables.side = mixture.side;
  tables.centre = centre;
  tables.noise_sd = noise_sd;
  tables.components.resize(mixture.components.size());
  if (noise) {
    tables.whiten = patch_columns(noise->whiten);
    tables.colour = noise->colour;
  }
  const int d = mixture.elements();
  pool.for_each(mixture.size(), [&](int k) {
    const PatchComponent& component = mixture.components[static_cast<std::size_t>(k)];
    ComponentTables& t = tables.components[static_cast<std::size_t>(k)];
    t.mean.assign(static_cast<std::size_t>(patch_stride(d)), 0.0f);
    SquareMatrix covariance(d);
    for (int i = 0; i < d * d; ++i) {
      const auto at = static_cast<std::size_t>(i);
      covariance.value[at] = component.covariance[at] / (noise_sd * noise_sd);
    }
    for (int i = 0; i < d; ++i) {
      const auto at = static_cast<std::size_t>(i);
      t.mean[at] = static_cast<float>((component.mean[at] - centre) / noise_sd);
    }
    fill_density(covariance, component.weight, noise, t);
    if (parts == TableParts::kAll) fill_conditional(covariance, noise, t);
  });
  return tables;
}

}  // namespace stillfield
