#include "model/patch_mixture.h"

#include <algorithm>

#include "model/patch_sample.h"
#include "model/patch_shares.h"
#include "model/patch_shrinkage.h"
#include "model/patch_tables.h"
#include "simd/patch_density.h"

namespace stillfield {
namespace {

constexpr std::size_t kMostPatches = 20000;
constexpr std::size_t kMostPatchesQuick = 10000;
constexpr int kIterations = 15;
constexpr int kIterationsQuick = 8;
constexpr float kLeastShare = 1e-6f;
constexpr double kLeastPatches = 4.0;  // a component with fewer is dropped

// Patches of one component with their posterior shares, in the sample's order.
struct Shares {
  std::vector<std::uint32_t> which;
  std::vector<float> weight;
};

PatchComponent fit_component(const PatchSample& sample, const Shares& shares) {
  const int d = sample.elements;
  const auto stride = static_cast<std::size_t>(patch_stride(d));
  PatchComponent out;
  double total = 0.0, noise = 0.0;
  std::vector<double> sum(static_cast<std::size_t>(d), 0.0);
  std::size_t plane = 0;
  for (std::size_t i = 0; i < shares.which.size(); ++i) {
    const std::size_t patch = shares.which[i];
    const double w = double{shares.weight[i]};
    while (patch >= sample.plane_start[plane + 1]) ++plane;
    total += w;
    noise += w * sample.plane_noise_sd[plane] * sample.plane_noise_sd[plane];
    for (std::size_t e = 0; e < sum.size(); ++e) sum[e] += w * double{sample.row(patch)[e]};
  }
  out.weight = total / static_cast<double>(sample.size);
  if (total < kLeastPatches) return out;
  std::vector<float> mean(stride, 0.0f);
  for (std::size_t e = 0; e < sum.size(); ++e) {
    mean[e] = static_cast<float>(sum[e] / total);
    out.mean.push_back(double{mean[e]});
  }
  std::vector<double> scatter(stride * static_cast<std::size_t>(d), 0.0);
  add_weighted_scatter(d, sample.rows.data(), shares.which, shares.weight, mean.data(),
                       scatter.data());
  std::vector<double> covariance(static_cast<std::size_t>(d) * static_cast<std::size_t>(d));
  for (int r = 0; r < d; ++r) {
    for (int c = 0; c <= r; ++c) {
      const double s = scatter[static_cast<std::size_t>(r) * stride + static_cast<std::size_t>(c)];
      covariance[static_cast<std::size_t>(r * d + c)] = s / total;
      covariance[static_cast<std::size_t>(c * d + r)] = s / total;
    }
  }
  out.covariance = shrunk_covariance(covariance, d, total, noise / total);
  return out;
}

PatchMixture fit_components(const PatchSample& sample, int side, const std::vector<Shares>& shares,
                            const Pool& pool) {
  std::vector<PatchComponent> fitted(shares.size());
  pool.for_each(static_cast<int>(shares.size()), [&](int k) {
    fitted[static_cast<std::size_t>(k)] =
        fit_component(sample, shares[static_cast<std::size_t>(k)]);
  });
  PatchMixture mixture;
  mixture.side = side;
  double weight = 0.0;
  for (PatchComponent& c : fitted) {
    if (c.mean.empty()) continue;
    weight += c.weight;
    mixture.components.push_back(std::move(c));
  }
  for (PatchComponent& c : mixture.components) c.weight /= weight;
  return mixture;
}

// Posterior shares of a batch of patches of one plane, [component][patch of the batch]. `factor`
// takes the sample to the noise units of the tables.
void share_batch(const PatchSample& sample, const PatchTables& tables, float factor,
                 std::size_t first, std::size_t count, float* share) {
  const int d = tables.elements();
  alignas(64) float batch[kMaxPatchSide * kMaxPatchSide * kDensityBatch];
  for (std::size_t b = 0; b < kDensityBatch; ++b) {
    const float* row = sample.row(first + std::min(b, count - 1));
    for (int e = 0; e < d; ++e) {
      batch[static_cast<std::size_t>(e) * kDensityBatch + b] = row[e] * factor;
    }
  }
  component_shares(tables, batch, static_cast<int>(count), share);
}

std::vector<Shares> share_patches(const PatchSample& sample, const PatchMixture& mixture,
                                  const Pool& pool) {
  std::vector<Shares> shares(mixture.components.size());
  const std::size_t block = shares.size() * kDensityBatch;
  for (std::size_t plane = 0; plane + 1 < sample.plane_start.size(); ++plane) {
    const std::size_t begin = sample.plane_start[plane];
    const std::size_t count = sample.plane_start[plane + 1] - begin;
    if (count == 0) continue;
    const PatchTables tables = make_patch_tables(mixture, sample.plane_noise_sd[plane], 0.0,
                                                 TableParts::kDensityOnly, pool);
    const auto factor = static_cast<float>(1.0 / sample.plane_noise_sd[plane]);
    const auto batches = static_cast<int>((count + kDensityBatch - 1) / kDensityBatch);
    AlignedBuffer<float> share(block * static_cast<std::size_t>(batches));
    pool.for_bands(batches, 8, [&](int first, int last) {
      for (int b = first; b < last; ++b) {
        const std::size_t start = static_cast<std::size_t>(b) * kDensityBatch;
        share_batch(sample, tables, factor, begin + start,
                    std::min(count - start, static_cast<std::size_t>(kDensityBatch)),
                    share.data() + static_cast<std::size_t>(b) * block);
      }
    });
    for (std::size_t k = 0; k < shares.size(); ++k) {
      for (std::size_t i = 0; i < count; ++i) {
        const float s = share[i / kDensityBatch * block + k * kDensityBatch + i % kDensityBatch];
        if (s < kLeastShare) continue;
        shares[k].which.push_back(static_cast<std::uint32_t>(begin + i));
        shares[k].weight.push_back(s);
      }
    }
  }
  return shares;
}

void whiten(PatchSample& sample, const PatchNoise& noise) {
  const std::vector<float> columns = patch_columns(noise.whiten);
  const auto stride = static_cast<std::size_t>(patch_stride(sample.elements));
  const std::vector<float> zero(stride, 0.0f);
  for (std::size_t i = 0; i < sample.size; ++i) {
    float* row = sample.rows.data() + i * stride;
    multiply_patch(sample.elements, columns.data(), row, nullptr, zero.data(), row);
  }
}

// The component of the patches themselves from that of whitened ones.
void colour(PatchComponent& c, const PatchNoise& noise) {
  SquareMatrix covariance(noise.colour.d);
  covariance.value = c.covariance;
  c.covariance = congruent(noise.colour, covariance).value;
  const std::vector<double> mean = c.mean;
  for (int r = 0; r < covariance.d; ++r) {
    double sum = 0.0;
    for (int k = 0; k <= r; ++k) sum += noise.colour(r, k) * mean[static_cast<std::size_t>(k)];
    c.mean[static_cast<std::size_t>(r)] = sum;
  }
}

}  // namespace

PatchMixture learn_patch_mixture(std::span<const PatchPlane> planes, const PatchSettings& settings,
                                 PhiloxKey key, const Pool& pool) {
  const PatchSettings s = resolved_settings(settings, planes);
  PatchSample sample =
      draw_patch_sample(planes, s.patch, s.quick ? kMostPatchesQuick : kMostPatches, key);
  PatchNoise noise;
  if (!s.noise_correlation.white()) {
    noise = patch_noise(s.noise_correlation, s.patch);
    whiten(sample, noise);
  }
  // A component needs about as many patches as elements to mean anything.
  const auto most = static_cast<int>(sample.size / static_cast<std::size_t>(2 * sample.elements));
  const int components = std::clamp(most, 1, s.components);
  const std::vector<std::uint32_t> label = first_partition(sample, components, key);
  std::vector<Shares> shares(static_cast<std::size_t>(components));
  for (std::size_t i = 0; i < sample.size; ++i) {
    shares[label[i]].which.push_back(static_cast<std::uint32_t>(i));
    shares[label[i]].weight.push_back(1.0f);
  }
  PatchMixture mixture = fit_components(sample, s.patch, shares, pool);
  const int iterations = s.quick ? kIterationsQuick : kIterations;
  for (int i = 0; i < iterations; ++i) {
    mixture = fit_components(sample, s.patch, share_patches(sample, mixture, pool), pool);
  }
  for (PatchComponent& c : mixture.components) {
    if (!s.noise_correlation.white()) colour(c, noise);
    for (double& m : c.mean) m = m * sample.unit + sample.centre;
    for (double& v : c.covariance) v *= sample.unit * sample.unit;
  }
  return mixture;
}

}  // namespace stillfield
