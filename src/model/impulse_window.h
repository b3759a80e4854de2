// The 5 x 5 window around a pixel, for the impulse detectors.
#ifndef STILLFIELD_MODEL_IMPULSE_WINDOW_H_
#define STILLFIELD_MODEL_IMPULSE_WINDOW_H_

#include <algorithm>
#include <array>
#include <cstddef>
#include <cstdint>

#include "core/volume.h"
#include "parallel/pool.h"

namespace stillfield {

inline constexpr int kImpulseRadius = 2;
inline constexpr std::size_t kImpulseNeighbours = 24;

// Values of a plane in the window around a pixel, without the pixel and without those out of play.
struct ImpulseWindow {
  std::array<float, kImpulseNeighbours> value{};
  std::size_t size = 0;

  ImpulseWindow(View<const float> plane, View<const std::uint8_t> in_play, int x, int y, int z) {
    for (int v = std::max(y - kImpulseRadius, 0);
         v <= std::min(y + kImpulseRadius, plane.height() - 1); ++v) {
      const float* row = plane.row(v, z);
      const std::uint8_t* good = in_play.row(v, z);
      for (int u = std::max(x - kImpulseRadius, 0);
           u <= std::min(x + kImpulseRadius, plane.width() - 1); ++u) {
        if (good[u] != 0 && (u != x || v != y)) value[size++] = row[u];
      }
    }
  }

  // The element of this rank, counted from 0; the window is not empty.
  float ranked(std::size_t rank) {
    const auto at = value.begin() + static_cast<std::ptrdiff_t>(std::min(rank, size - 1));
    std::nth_element(value.begin(), at, value.begin() + static_cast<std::ptrdiff_t>(size));
    return *at;
  }
};

// Calls body(y, z) for every row, in parallel.
template <class Body>
void for_image_rows(const Extent& e, const Pool& pool, const Body& body) {
  const int grain = std::max(1, 4000 / std::max(e.width, 1));
  pool.for_bands(e.height * e.depth, grain, [&](int first, int last) {
    for (int i = first; i < last; ++i) body(i % e.height, i / e.height);
  });
}

}  // namespace stillfield

#endif  // STILLFIELD_MODEL_IMPULSE_WINDOW_H_
