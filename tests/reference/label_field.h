// Slow twin of the label kernels: one pixel at a time on plain arrays, straight from the formulas.
//
// It knows nothing of the colour-split layout, of bands or of vectors; it shares with the program
// only Philox, exp, the table of weights by grey level and the list of neighbours, which have
// tests of their own. Arrays are in image order, x fastest.
#ifndef STILLFIELD_TESTS_REFERENCE_LABEL_FIELD_H_
#define STILLFIELD_TESTS_REFERENCE_LABEL_FIELD_H_

#include <cstdint>
#include <vector>

#include "core/extent.h"
#include "model/neighbourhood.h"
#include "model/weight_table.h"
#include "random/counters.h"

namespace stillfield::reference {

struct LabelField {
  Extent extent;
  Offset offset;
  Neighbourhood neighbourhood;
  int classes = 2;
  double beta = 0.0;
  WeightTable table;
  PhiloxKey key{};
  Purpose purpose = Purpose::kLabels;

  std::vector<std::uint16_t> level;
  std::vector<std::uint8_t> label;
  std::vector<std::vector<int>> visits;  // one a class above the first

  std::size_t at(int x, int y, int z) const {
    return (static_cast<std::size_t>(z) * extent.height + y) * extent.width + x;
  }
  bool inside(int x, int y, int z) const {
    return x >= 0 && x < extent.width && y >= 0 && y < extent.height && z >= 0 && z < extent.depth;
  }
};

struct FieldTotals {
  std::vector<std::uint64_t> sites, observed, level_sum, level_square_sum;
  std::vector<std::uint64_t> equal_pairs;  // one a ring
};

// One Gibbs sweep; `sweep` is its number in the counters. Adds to the visits.
void sweep_field(LabelField& field, std::uint32_t sweep);

FieldTotals total_field(const LabelField& field, std::uint16_t missing);

}  // namespace stillfield::reference

#endif  // STILLFIELD_TESTS_REFERENCE_LABEL_FIELD_H_
