// Formulas and layout: simd/patch_density.h.
#include "simd/patch_density.h"

#include <algorithm>

#include "simd/patch_group.h"

#undef HWY_TARGET_INCLUDE
#define HWY_TARGET_INCLUDE "simd/patch_density.cc"
#include <hwy/foreach_target.h>
// foreach_target.h must come first.
#include <hwy/highway.h>

HWY_BEFORE_NAMESPACE();
namespace stillfield {
namespace HWY_NAMESPACE {
namespace hn = hwy::HWY_NAMESPACE;

using BatchTag = hn::CappedTag<float, 16>;
using BatchVec = hn::Vec<BatchTag>;

// Sums of float products are moved to doubles after this many patches.
constexpr std::size_t kScatterChunk = 256;

void patch_log_densities(int elements, const float* patches, const float* mean,
                         const float* row_blocks, float constant, float* out) {
  const BatchTag d;
  const int lanes = static_cast<int>(hn::Lanes(d));
  constexpr int kVectors = 2;
  HWY_ALIGN float centred[kMaxPatchElements * kDensityBatch];
  for (int e = 0; e < elements; ++e) {
    const BatchVec m = hn::Set(d, mean[e]);
    for (int b = 0; b < kDensityBatch; b += lanes) {
      const int at = e * kDensityBatch + b;
      hn::Store(hn::Sub(hn::LoadU(d, patches + at), m), d, centred + at);
    }
  }
  for (int b = 0; b < kDensityBatch; b += kVectors * lanes) {
    BatchVec square[kVectors] = {hn::Zero(d), hn::Zero(d)};
    for (int block = 0; block < elements / 4; ++block) {
      const float* h = row_blocks + row_block_start(block);
      BatchVec sum[4][kVectors];
      for (auto& row : sum) {
        row[0] = hn::Zero(d);
        row[1] = hn::Zero(d);
      }
      for (int c = 0; c < 4 * block + 4; ++c, h += 4) {
        const float* x = centred + c * kDensityBatch + b;
        const BatchVec x0 = hn::Load(d, x);
        const BatchVec x1 = hn::Load(d, x + lanes);
#pragma GCC unroll 4
        for (int r = 0; r < 4; ++r) {
          const BatchVec factor = hn::Set(d, h[r]);
          sum[r][0] = hn::Add(sum[r][0], hn::Mul(factor, x0));
          sum[r][1] = hn::Add(sum[r][1], hn::Mul(factor, x1));
        }
      }
      for (const auto& row : sum) {
        square[0] = hn::Add(square[0], hn::Mul(row[0], row[0]));
        square[1] = hn::Add(square[1], hn::Mul(row[1], row[1]));
      }
    }
    const BatchVec c = hn::Set(d, constant);
    const BatchVec half = hn::Set(d, 0.5f);
    hn::StoreU(hn::Sub(c, hn::Mul(half, square[0])), d, out + b);
    hn::StoreU(hn::Sub(c, hn::Mul(half, square[1])), d, out + b + lanes);
  }
}

void multiply_patch(int elements, const float* columns, const float* y, const float* mean,
                    const float* start, float* out) {
  const BatchTag d;
  const int lanes = static_cast<int>(hn::Lanes(d));
  const int stride = patch_stride(elements);
  float x[kMaxPatchElements];
  for (int c = 0; c < elements; ++c) x[c] = mean ? y[c] - mean[c] : y[c];
  for (int j = 0; j < stride; j += lanes) {
    BatchVec sum = hn::LoadU(d, start + j);
    for (int c = 0; c < elements; ++c) {
      sum = hn::Add(sum, hn::Mul(hn::Set(d, x[c]), hn::LoadU(d, columns + c * stride + j)));
    }
    hn::StoreU(sum, d, out + j);
  }
}

void add_weighted_scatter(int elements, const float* rows, std::span<const std::uint32_t> which,
                          std::span<const float> weight, const float* mean, double* sum) {
  const BatchTag d;
  const int lanes = static_cast<int>(hn::Lanes(d));
  const int stride = patch_stride(elements);
  HWY_ALIGN float centred[kScatterChunk * kMaxPatchElements];
  HWY_ALIGN float part[4][kMaxPatchElements];
  for (std::size_t first = 0; first < which.size(); first += kScatterChunk) {
    const std::size_t n = std::min(kScatterChunk, which.size() - first);
    for (std::size_t i = 0; i < n; ++i) {
      const float* y = rows + static_cast<std::size_t>(which[first + i]) * stride;
      for (int e = 0; e < stride; ++e) {
        centred[i * stride + e] = e < elements ? y[e] - mean[e] : 0.0f;
      }
    }
    for (int i = 0; i < elements; i += 4) {
      for (int j = 0; j <= i + 3; j += lanes) {
        BatchVec s[4] = {hn::Zero(d), hn::Zero(d), hn::Zero(d), hn::Zero(d)};
        for (std::size_t p = 0; p < n; ++p) {
          const float* x = centred + p * stride;
          const BatchVec wx = hn::Mul(hn::Set(d, weight[first + p]), hn::Load(d, x + j));
#pragma GCC unroll 4
          for (int r = 0; r < 4; ++r) s[r] = hn::Add(s[r], hn::Mul(hn::Set(d, x[i + r]), wx));
        }
        for (int r = 0; r < 4; ++r) hn::Store(s[r], d, part[r] + j);
      }
      for (int r = 0; r < 4; ++r) {
        for (int j = 0; j <= i + r; ++j) sum[(i + r) * stride + j] += double{part[r][j]};
      }
    }
  }
}

}  // namespace HWY_NAMESPACE
}  // namespace stillfield
HWY_AFTER_NAMESPACE();

#if HWY_ONCE
namespace stillfield {

HWY_EXPORT(patch_log_densities);
HWY_EXPORT(multiply_patch);
HWY_EXPORT(add_weighted_scatter);

void patch_log_densities(int elements, const float* patches, const float* mean,
                         const float* row_blocks, float constant, float* out) {
  HWY_DYNAMIC_DISPATCH(patch_log_densities)(elements, patches, mean, row_blocks, constant, out);
}

void multiply_patch(int elements, const float* columns, const float* y, const float* mean,
                    const float* start, float* out) {
  HWY_DYNAMIC_DISPATCH(multiply_patch)(elements, columns, y, mean, start, out);
}

void add_weighted_scatter(int elements, const float* rows, std::span<const std::uint32_t> which,
                          std::span<const float> weight, const float* mean, double* sum) {
  HWY_DYNAMIC_DISPATCH(add_weighted_scatter)(elements, rows, which, weight, mean, sum);
}

}  // namespace stillfield
#endif
