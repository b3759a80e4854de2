// A plane with a margin of kMargin elements on every side, so that windows need no bounds checks.
//
// Index    row(y)[x], x and y from -kMargin to size + kMargin - 1; the margin starts as zeros
#ifndef STILLFIELD_SAMPLER_PADDED_PLANE_H_
#define STILLFIELD_SAMPLER_PADDED_PLANE_H_

#include "core/volume.h"
#include "model/blur.h"

namespace stillfield {

template <typename T>
class PaddedPlane {
 public:
  static constexpr int kMargin = 2 * kLargestBlurRadius;

  PaddedPlane() = default;
  explicit PaddedPlane(Extent extent)
      : extent_(extent), whole_({extent.width + 2 * kMargin, extent.height + 2 * kMargin}) {}

  const Extent& extent() const { return extent_; }
  T* row(int y) { return whole_.row(y + kMargin) + kMargin; }
  // The image without its margin.
  View<const T> view() const {
    return {row(0), extent_, extent_.height > 1 ? row(1) - row(0) : 0};
  }
  const T* row(int y) const { return whole_.row(y + kMargin) + kMargin; }

 private:
  Extent extent_{0, 0, 1};
  Volume<T> whole_;
};

}  // namespace stillfield

#endif  // STILLFIELD_SAMPLER_PADDED_PLANE_H_
