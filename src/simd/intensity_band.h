// What the kernels of intensity fields eat: a band of rows of one colour of one slice.
//
// Planes      float, colour-split, rows `stride` floats apart, column j of a row at [j]. The field
//             and the pair planes have guards around each row, row block and slice that are zero
//             and stay zero; columns beyond the image are zero in every plane.
// Neighbours  those of one distance (a ring) one after the other, nearest ring first; w is their
//             weight. A neighbour outside the image does not exist: it adds neither to sums nor to
//             total weights.
// Random      word of column j and row r: random/counters.h, as for labels.
#ifndef STILLFIELD_SIMD_INTENSITY_BAND_H_
#define STILLFIELD_SIMD_INTENSITY_BAND_H_

#include <array>
#include <cstddef>

#include "simd/random_rows.h"

namespace stillfield {

inline constexpr int kMaxNeighbours = 26;
inline constexpr int kMaxPairPlanes = kMaxNeighbours / 2;
inline constexpr int kColumnQuantum = 16;  // `columns` is a multiple of this

struct IntensityNeighbour {
  float weight = 1.0f;  // w_st, equal within a ring
  // Floats from a site to this neighbour, for even and odd rows.
  std::array<std::ptrdiff_t, 2> offset{};
  // Sites that have this neighbour: columns [begin, end) by row parity, rows [first_row, last_row).
  std::array<int, 2> begin{};
  std::array<int, 2> end{};
  int first_row = 0;
  int last_row = 0;
  // Each pair belongs to the end that lies before the other in image order.
  bool forward = false;
  int pair_plane = 0;  // same for both directions of a pair
};

// Per row and constant over sweeps. Rows that are alike share their arrays: what the kernels
// compute from them is then kept from row to row.
struct IntensityRow {
  const float* total_weight = nullptr;  // sum of w_st over a site's neighbours
  const float* precision = nullptr;     // of the noise, in units of noise_precision; 0: missing
};

struct IntensityBand {
  int columns = 0;
  int first_row = 0;  // even
  int rows = 0;
  std::ptrdiff_t stride = 0;

  float* field = nullptr;             // x; column 0 of row 0 of this colour (not of first_row)
  const float* value = nullptr;       // y; finite where missing
  const IntensityRow* row = nullptr;  // of row 0
  float* sum = nullptr;               // grows by x - shift; null: no moments
  float* square = nullptr;            // grows by (x - shift)^2
  const float* shift = nullptr;
  float* pair_precision = nullptr;  // edges: omega_st at the pair's owner
  std::ptrdiff_t pair_plane = 0;    // floats from one pair plane to the next

  float strength = 0.0f;         // smooth: lambda; edges: tau
  float noise_precision = 1.0f;  // 1 / sigma^2

  int rings = 0;
  std::array<int, 5> ring_size{};
  std::array<IntensityNeighbour, kMaxNeighbours> neighbour{};
  RandomPlane random{};
};

}  // namespace stillfield

#endif  // STILLFIELD_SIMD_INTENSITY_BAND_H_
