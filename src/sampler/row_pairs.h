// The parallel loop over all rows of one colour, in pairs that share their random blocks.
#ifndef STILLFIELD_SAMPLER_ROW_PAIRS_H_
#define STILLFIELD_SAMPLER_ROW_PAIRS_H_

#include <algorithm>

#include "parallel/pool.h"
#include "sampler/colouring.h"

namespace stillfield {

// A band worth a task: some 20 000 pixels.
inline constexpr int kSitesPerTask = 20000;

// Calls body(slice, first_row, rows) over all rows of one colour, in parallel, in pairs of rows:
// first_row is even. Bands never cross a slice.
template <class Body>
void for_row_pairs(const Colouring& c, int colour, const Pool& pool, const Body& body) {
  const int pairs = (c.rows(colour) + 1) / 2;
  if (pairs == 0) return;
  const int grain = std::max(1, kSitesPerTask / (8 * c.words()));
  pool.for_bands(c.slices(colour) * pairs, grain, [&](int first, int last) {
    while (first < last) {
      const int slice = first / pairs;
      const int begin = first % pairs;
      const int end = std::min(pairs, begin + (last - first));
      body(slice, 2 * begin, std::min(2 * end, c.rows(colour)) - 2 * begin);
      first += end - begin;
    }
  });
}

}  // namespace stillfield

#endif  // STILLFIELD_SAMPLER_ROW_PAIRS_H_
