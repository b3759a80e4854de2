// Sizes and positions of grids. A plane is a volume of depth 1.
#ifndef STILLFIELD_CORE_EXTENT_H_
#define STILLFIELD_CORE_EXTENT_H_

#include <cstdint>

namespace stillfield {

// Number of pixels along x, y and z.
struct Extent {
  int width = 0;
  int height = 0;
  int depth = 1;

  std::int64_t sites() const { return std::int64_t{width} * height * depth; }
  bool operator==(const Extent&) const = default;
};

// Position of a view's first pixel in the whole grid. Random numbers belong to global positions,
// so a tile computed on its own draws what the whole image would have drawn there.
struct Offset {
  std::int64_t x = 0;
  std::int64_t y = 0;
  std::int64_t z = 0;

  bool operator==(const Offset&) const = default;
};

}  // namespace stillfield

#endif  // STILLFIELD_CORE_EXTENT_H_
