// Standardised residuals of an image under one label draw, in blocks.
//
//   e_s = (y_s - mean_k) / sd_k,  k = z_s
//
// The checks of predictive_checks.h walk over blocks: each holds its pixels' classes and
// residuals, of the image or of a replicate drawn from the model given the same labels:
//   y_rep = mean_k + sd_k N(0, 1), rounded to the image's grey levels and limited to their range,
//   so that rounding and a few clipped values look the same on both sides
// Inner    a pixel whose 3 x 3 surroundings all have its class: mixed pixels along borders do not
//          pass for noise
// Which    all blocks of an image up to kMostCheckedPixels; of a larger one as many, evenly spread
// Layout   row by row, kResidualBlock columns a row whatever the block's width
#ifndef STILLFIELD_DIAGNOSE_RESIDUAL_BLOCK_H_
#define STILLFIELD_DIAGNOSE_RESIDUAL_BLOCK_H_

#include <array>
#include <cstdint>
#include <vector>

#include "core/volume.h"
#include "model/grey_levels.h"
#include "model/label_model.h"
#include "random/counters.h"

namespace stillfield {

inline constexpr int kResidualBlock = 16;
inline constexpr std::int64_t kMostCheckedPixels = std::int64_t{1} << 18;

struct ResidualBlock {
  static constexpr int kPixels = kResidualBlock * kResidualBlock;
  int x = 0, y = 0;  // of the first pixel
  int width = 0, height = 0;
  std::uint32_t number = 0;                 // among all blocks of the image
  std::array<std::uint8_t, kPixels> label;  // 1..K; 0: nothing observed
  std::array<std::uint8_t, kPixels> inner;  // 1..K for inner pixels, else 0
  std::array<float, kPixels> residual;      // where label is not 0
};

// Places and sizes only.
std::vector<ResidualBlock> residual_blocks(const Extent& extent);

// Classes of the block's pixels. labels: 1..K.
void mark_labels(View<const std::uint8_t> labels, const GreyLevels& grey, ResidualBlock& block);

// light: class means are multiplied by it; null: even.
void observed_residuals(const GreyLevels& grey, const GaussianClasses& classes,
                        ResidualBlock& block, const Volume<float>* light = nullptr);

// Of draw number `draw` of the chain with this key.
void replicated_residuals(const GreyLevels& grey, const GaussianClasses& classes, PhiloxKey key,
                          std::uint32_t draw, ResidualBlock& block,
                          const Volume<float>* light = nullptr);

}  // namespace stillfield

#endif  // STILLFIELD_DIAGNOSE_RESIDUAL_BLOCK_H_
