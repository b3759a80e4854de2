// The patches of an estimate that look most like a reference patch.
//
// Maths    least sum of squared differences among all positions within kSearchReach pixels
//          (Buades, Coll & Morel 2005); ties go to the earlier position, row by row
#ifndef STILLFIELD_SAMPLER_PATCH_SEARCH_H_
#define STILLFIELD_SAMPLER_PATCH_SEARCH_H_

#include <cstdint>
#include <span>
#include <vector>

#include "core/aligned_buffer.h"
#include "core/extent.h"
#include "sampler/patch_labels.h"

namespace stillfield {

inline constexpr int kSearchReach = 12;

// An estimate with room behind each row for the runs of simd/patch_distance.h.
class SearchImage {
 public:
  explicit SearchImage(Extent extent);

  const Extent& extent() const { return extent_; }
  float* row(int y) { return pixels_.data() + std::ptrdiff_t{y} * stride_; }
  const float* row(int y) const { return pixels_.data() + std::ptrdiff_t{y} * stride_; }
  std::ptrdiff_t stride() const { return stride_; }

 private:
  Extent extent_;
  std::ptrdiff_t stride_;
  AlignedBuffer<float> pixels_;
};

class PatchSearch {
 public:
  PatchSearch(const SearchImage& image, int side);

  // Writes the nearest positions, nearest first; the reference itself is among them. There are at
  // least `nearest.size()` positions within reach.
  void find(PatchPosition reference, std::span<PatchPosition> nearest);

 private:
  const SearchImage* image_;
  int side_;
  std::vector<std::uint64_t> keys_;  // distance in the upper half, position below
};

}  // namespace stillfield

#endif  // STILLFIELD_SAMPLER_PATCH_SEARCH_H_
