// A set of an image's flattest blocks: the noise variance they show, and how flat they are.
//
// Maths    flatness = mean low-frequency energy of the chosen blocks, slopes left out, / variance
// of
//          their high part
//          / E0, where E0 is the mean of the lowest `share` of chi^2_m / m, what blocks of pure
//          noise would give (m = coefficients of the low part). 1: flat; large: structure
//          everywhere count(share) = share of the blocks, but more (at most 30 %) while there are
//          fewer than `few`
#ifndef STILLFIELD_MODEL_NOISE_FLAT_SET_H_
#define STILLFIELD_MODEL_NOISE_FLAT_SET_H_

#include <cstdint>
#include <functional>
#include <span>
#include <vector>

#include "model/noise_blocks.h"

namespace stillfield {

struct FlatSet {
  HighSums sums;
  double variance = 0.0;
  double grey = 0.0;
  double flatness = 0.0;
};

FlatSet flat_set(View<const float> image, const NoiseBlocks& blocks,
                 std::span<const std::uint32_t> among, double share, std::size_t few);

// Jackknife error of statistic(left_out_tile) over the tiles that hold any block of the sets.
double tile_error(std::span<const FlatSet> sets, const std::function<double(int)>& statistic);

}  // namespace stillfield

#endif  // STILLFIELD_MODEL_NOISE_FLAT_SET_H_
