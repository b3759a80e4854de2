#include "sampler/patch_search.h"

#include <algorithm>
#include <bit>

#include "simd/patch_distance.h"

namespace stillfield {
namespace {

static_assert(2 * kSearchReach + 1 <= kDistanceRun);

}  // namespace

SearchImage::SearchImage(Extent extent)
    : extent_(extent),
      stride_(static_cast<std::ptrdiff_t>(
          round_up(static_cast<std::size_t>(extent.width) + 2 * kDistanceRun, 16))),
      pixels_(static_cast<std::size_t>(stride_) * static_cast<std::size_t>(extent.height)) {}

PatchSearch::PatchSearch(const SearchImage& image, int side) : image_(&image), side_(side) {}

void PatchSearch::find(PatchPosition reference, std::span<PatchPosition> nearest) {
  const Extent& e = image_->extent();
  const int x0 = std::max(reference.x - kSearchReach, 0);
  const int x1 = std::min(reference.x + kSearchReach, e.width - side_);
  const int y0 = std::max(reference.y - kSearchReach, 0);
  const int y1 = std::min(reference.y + kSearchReach, e.height - side_);
  alignas(64) float distance[kDistanceRun];
  keys_.clear();
  for (int y = y0; y <= y1; ++y) {
    patch_distances(side_, image_->row(reference.y) + reference.x, image_->row(y) + x0,
                    image_->stride(), distance);
    for (int x = x0; x <= x1; ++x) {
      // Distances are not negative, so their bits are in the order of their values.
      const std::uint64_t bits = std::bit_cast<std::uint32_t>(distance[x - x0]);
      keys_.push_back(bits << 32 | static_cast<std::uint64_t>((y - y0) * kDistanceRun + x - x0));
    }
  }
  const auto end = keys_.begin() + static_cast<std::ptrdiff_t>(nearest.size());
  std::nth_element(keys_.begin(), end - 1, keys_.end());
  std::sort(keys_.begin(), end);
  for (std::size_t i = 0; i < nearest.size(); ++i) {
    const auto at = static_cast<int>(keys_[i] & 0xffffffffu);
    nearest[i] = {x0 + at % kDistanceRun, y0 + at / kDistanceRun};
  }
}

}  // namespace stillfield
