// Random words of a pair of pixel rows, as the counter layout of random/counters.h defines them.
#ifndef STILLFIELD_SIMD_RANDOM_ROWS_H_
#define STILLFIELD_SIMD_RANDOM_ROWS_H_

#include <cstdint>

#include "random/philox.h"

namespace stillfield {

// Names the random words of one colour of one slice at one sweep.
struct RandomPlane {
  PhiloxKey key{};
  std::uint32_t sweep = 0;
  std::uint32_t word3 = 0;         // counter_word3(purpose, colour, slice)
  std::uint32_t first_column = 0;  // global column of local column 0; even
  std::uint32_t first_row = 0;     // global row of local row 0; even
};

// Writes the words of columns [0, columns) of rows 2 * pair and 2 * pair + 1.
// Both outputs are 64-byte aligned and have room for round_up(columns, 16) words.
void random_row_pair(const RandomPlane& plane, std::uint32_t pair, int columns,
                     std::uint32_t* even_row, std::uint32_t* odd_row);

}  // namespace stillfield

#endif  // STILLFIELD_SIMD_RANDOM_ROWS_H_
