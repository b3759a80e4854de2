// In how many places a box fits into the region of interest without touching its edge.
//
// A particle is seen whole only if its bounding box, with a margin of one pixel, lies in the
// region: the chance of that is places / area, the same for every place the particle may have
// fallen to (Miles 1974, Lantuejoul 1980). A frame of W x H leaves (W - w - 1)(H - h - 1) places.
//
// Method   boxes of every size at once: for each bottom row the maximal rectangles below a
//          histogram of column heights, found with a stack, O(pixels + largest w x h)
// Units    pixels
#ifndef STILLFIELD_MEASURE_BOX_PLACES_H_
#define STILLFIELD_MEASURE_BOX_PLACES_H_

#include <cstdint>
#include <vector>

#include "core/volume.h"

namespace stillfield {

class BoxPlaces {
 public:
  // For boxes of up to `width` x `height`. Usable pixels are not 0; all are if `usable` is empty.
  BoxPlaces(Extent frame, View<const std::uint8_t> usable, int width, int height);

  std::int64_t area() const { return area_; }  // usable pixels
  std::int64_t places(int width, int height) const;

 private:
  struct Intervals {
    std::int64_t count = 0;
    std::int64_t length = 0;  // sum of length + 1
  };
  void count_row(const std::vector<int>& heights);
  Intervals& cell(int width, int height) {
    return table_[static_cast<std::size_t>(height) * (static_cast<std::size_t>(widest_) + 1) +
                  static_cast<std::size_t>(width)];
  }

  Extent frame_;
  bool whole_frame_;
  std::int64_t area_ = 0;
  int widest_ = 0, highest_ = 0;  // with margins
  std::vector<Intervals> table_;  // [height][width]
};

}  // namespace stillfield

#endif  // STILLFIELD_MEASURE_BOX_PLACES_H_
