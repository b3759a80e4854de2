// Slow twin of the kernels of intensity fields: one pixel at a time on plain arrays, straight from
// the formulas of simd/intensity_rows.h and simd/intensity_pairs.h.
//
// It knows nothing of colour-split planes, bands, guards or vectors; it shares with the program
// only Philox, the scalar normal numbers and the list of neighbours, which have tests of their own.
// Arrays are in image order, x fastest.
#ifndef STILLFIELD_TESTS_REFERENCE_INTENSITY_FIELD_H_
#define STILLFIELD_TESTS_REFERENCE_INTENSITY_FIELD_H_

#include <cstdint>
#include <vector>

#include "core/extent.h"
#include "model/neighbourhood.h"
#include "random/counters.h"

namespace stillfield::reference {

struct IntensityField {
  Extent extent;
  Offset offset;
  Neighbourhood neighbourhood;
  PhiloxKey key{};
  float strength = 1.0f;         // lambda or tau
  float noise_precision = 1.0f;  // 1 / sigma^2

  std::vector<float> x, value, precision;
  std::vector<float> shift, sum, square;  // moments, when not empty
  // [pair plane][pixel]: precision of the pair of a pixel and its forward neighbour, in the order
  // of the neighbourhood's forward displacements. Empty for a smooth field.
  std::vector<std::vector<float>> pair_precision;

  std::size_t at(int px, int py, int pz) const {
    return (static_cast<std::size_t>(pz) * extent.height + py) * extent.width + px;
  }
  bool inside(int px, int py, int pz) const {
    return px >= 0 && px < extent.width && py >= 0 && py < extent.height && pz >= 0 &&
           pz < extent.depth;
  }
};

void sweep_smooth(IntensityField& field, std::uint32_t sweep);
// Pair precisions, then pixels.
void sweep_edges(IntensityField& field, std::uint32_t sweep);

struct FieldSums {
  double squared_differences = 0.0, absolute_differences = 0.0, squared_residuals = 0.0;
};
FieldSums sum_field(const IntensityField& field);

}  // namespace stillfield::reference

#endif  // STILLFIELD_TESTS_REFERENCE_INTENSITY_FIELD_H_
