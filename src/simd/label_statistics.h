// Exact integer sums over a label field: class sizes, grey-level sums, equal neighbours.
#ifndef STILLFIELD_SIMD_LABEL_STATISTICS_H_
#define STILLFIELD_SIMD_LABEL_STATISTICS_H_

#include <array>
#include <cstdint>
#include <vector>

#include "simd/label_band.h"

namespace stillfield {

struct LabelSums {
  explicit LabelSums(int classes)
      : sites(static_cast<std::size_t>(classes)),
        observed(sites),
        level_sum(sites),
        level_square_sum(sites) {}

  void add(const LabelSums& other);

  std::vector<std::uint64_t> sites;      // pixels of each class
  std::vector<std::uint64_t> observed;   // those whose grey level is not missing
  std::vector<std::uint64_t> level_sum;  // over observed pixels
  std::vector<std::uint64_t> level_square_sum;
  // Pairs (site, neighbour) with equal labels, by ring; over a whole field each pair counts twice.
  std::array<std::uint64_t, kMaxRings> equal_ends{};
};

// Adds the band's rows to `sums`. `levels` is element 0 of row 0 of the colour's plane of grey
// levels, in image order with the stride of the weights; `missing` marks pixels without a value.
void sum_label_rows(const LabelBand& band, const std::uint16_t* levels, std::uint16_t missing,
                    LabelSums& sums);

// count[i] += visits[i] and visits[i] = 0, for n elements (n a multiple of 64).
void empty_visits(std::size_t n, std::uint8_t* visits, std::uint16_t* count);

}  // namespace stillfield

#endif  // STILLFIELD_SIMD_LABEL_STATISTICS_H_
