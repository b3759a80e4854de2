// Small square blocks of an image, split by a discrete cosine transform into a part that says how
// flat a block is and a part that says how noisy it is.
//
// Maths    orthonormal DCT-II of a p x p block (p = 8, 6, 5 or 4), coefficients (i, j):
//          low part   0 < i + j <= low_limit: its energy is small in flat blocks
//          high part  i + j >= high_limit: holds little but noise in flat blocks
//          For white Gaussian noise the two parts are independent, so choosing blocks by their low
//          energy does not bias the variance of their high part. Blocks sorted by low-frequency
//          energy: Ponomarenko, Lukin, Zriazhkov, Kaarna & Astola 2007.
// Blocks   every position whose p^2 pixels are all usable, in raster order; in images above
//          kMostSites pixels only every n-th row of positions. p is the largest that leaves
//          enough blocks; 4 if none does
// Tiles    the image is divided into 8 x 8 tiles: the units of the jackknife (Efron & Tibshirani)
// Errors   Error(kInput) when fewer than kFewestBlocks blocks are left
#ifndef STILLFIELD_MODEL_NOISE_BLOCKS_H_
#define STILLFIELD_MODEL_NOISE_BLOCKS_H_

#include <array>
#include <cstdint>
#include <span>
#include <vector>

#include "core/volume.h"
#include "parallel/pool.h"

namespace stillfield {

inline constexpr std::int64_t kMostSites = std::int64_t{1} << 20;
inline constexpr int kFewestBlocks = 100;
inline constexpr int kNoiseTiles = 64;
inline constexpr int kMostHighParts = 21;  // coefficients of the high part at p = 8

struct BlockPlace {
  int x = 0, y = 0, z = 0;
};

struct NoiseBlocks {
  int size = 8;        // p
  int high_parts = 0;  // coefficients of the high part
  std::vector<BlockPlace> place;
  std::vector<double> mean;  // grey value
  std::vector<double> low;   // mean square of the low part's coefficients
  std::vector<double> bent;  // the same without (0, 1) and (1, 0), which a plain slope fills
};

NoiseBlocks find_noise_blocks(View<const float> image, View<const std::uint8_t> usable,
                              const Pool& pool);

// Sums of squares of each high coefficient over a set of blocks, tile by tile.
struct HighSums {
  struct Tile {
    double blocks = 0.0;
    double mean = 0.0;  // sum of the blocks' means
    std::array<double, kMostHighParts> square{};
  };
  int high_parts = 0;
  std::array<Tile, kNoiseTiles> tile;

  // Pooled over all tiles but `left_out` (-1: none): the median over the coefficients of their
  // mean squares, which one coefficient with leftover structure does not move.
  double variance(int left_out = -1) const;
  double grey(int left_out = -1) const;  // mean of the blocks' means
};

HighSums sum_high_parts(View<const float> image, const NoiseBlocks& blocks,
                        std::span<const std::uint32_t> chosen);

// The `count` blocks of `among` with the least low-frequency energy, in raster order; ties at the
// limit are all taken.
std::vector<std::uint32_t> flattest_blocks(const NoiseBlocks& blocks,
                                           std::span<const std::uint32_t> among, std::size_t count);

// Standard error of a statistic from its values with one tile left out each (NaN: not used).
double jackknife_error(std::span<const double> left_out_values);

}  // namespace stillfield

#endif  // STILLFIELD_MODEL_NOISE_BLOCKS_H_
