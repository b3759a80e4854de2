// Gaussian densities of many patches, and products of patches with one matrix.
//
// Densities  log N(y; mean, S) + constant = constant - |H (y - mean)|^2 / 2, H lower triangular
//            with H'H = S^-1, for 64 patches side by side. Sums over elements run upwards.
// Products   out = start + M (y - mean) for one patch; lanes are elements of the result.
// Scatter    sum of w_i (y_i - mean)(y_i - mean)' over a list of patches in its order.
// Layout     d elements a patch, a multiple of 4, at most kMaxPatchElements. Element-major batches
//            hold element e of patch b at e * kDensityBatch + b; patch-major rows have
//            patch_stride(d) floats, the padding zero.
// Bytes      the same on every CPU target; tests/simd/patch_density_test.cc
#ifndef STILLFIELD_SIMD_PATCH_DENSITY_H_
#define STILLFIELD_SIMD_PATCH_DENSITY_H_

#include <cstddef>
#include <cstdint>
#include <span>

namespace stillfield {

inline constexpr int kDensityBatch = 64;

// Floats of a patch-major row.
constexpr int patch_stride(int elements) {
  return (elements + 15) / 16 * 16;
}

// H as blocks of four rows: rows 4b .. 4b + 3, columns 0 .. 4b + 3, the four rows of a column side
// by side; zeros above the diagonal. Start of a block:
constexpr std::ptrdiff_t row_block_start(int b) {
  return std::ptrdiff_t{8} * b * (b + 1);
}

// log densities of kDensityBatch patches, one component.
void patch_log_densities(int elements, const float* patches, const float* mean,
                         const float* row_blocks, float constant, float* out);

// out(j) = start(j) + sum over c of m[c * patch_stride + j] * x(c), patch-major rows; x = y - mean
// when mean is not null. out may be start.
void multiply_patch(int elements, const float* columns, const float* y, const float* mean,
                    const float* start, float* out);

// Adds to sum (d rows of patch_stride(d) doubles; the lower triangle at least is valid) the
// weighted squares of the patches named by `which`.
void add_weighted_scatter(int elements, const float* rows, std::span<const std::uint32_t> which,
                          std::span<const float> weight, const float* mean, double* sum);

}  // namespace stillfield

#endif  // STILLFIELD_SIMD_PATCH_DENSITY_H_
