// The one layout of Philox counters: which random word belongs to what.
//
// Every random number is a pure function of (seed, image, chain, sweep, purpose, position), so it
// does not depend on the order of work, on threads, on the vector width or on tiling.
//
//   key      64 bits: the image's seed, with the chain number folded into the upper word
//   c0       column >> 1   (column: index within the row of one colour, global)
//   c1       row >> 1      (row: index within the plane of one colour, global)
//   c2       sweep
//   c3       slice << 8 | purpose << 3 | colour      (slice < 2^24)
//
// One block serves two columns and two rows. In the last round the vector kernels hold words
// (x1, x0) and (x3, x2) side by side in 64-bit lanes, ready to be stored:
//
//              even column   odd column
//   even row       x1            x0
//   odd row        x3            x2
//
// Scalar draws (parameters, starts) use RandomStream (stream.h) with c0 = position in the stream.
#ifndef STILLFIELD_RANDOM_COUNTERS_H_
#define STILLFIELD_RANDOM_COUNTERS_H_

#include <cstdint>
#include <span>

#include "random/philox.h"

namespace stillfield {

// What a random number is for; at most 32 purposes.
enum class Purpose : std::uint32_t {
  kLabels = 0,       // one uniform a pixel and sweep
  kParameters = 1,   // class means, variances, coupling
  kStart = 2,        // over-dispersed starts
  kLogZ = 3,         // label sweeps of the path-sampling integral
  kSimulation = 4,   // synthetic images of generators, tests and studies
  kHeldOut = 5,      // search for the coupling on held-out pixels
  kIntensity = 6,    // one normal a pixel and sweep of an intensity field
  kPairScale = 7,    // auxiliary scales of neighbour differences
  kTiling = 8,       // patches of a random tiling: c0, c1 = first pixel (sampler/patch_tiling.h)
  kGroup = 9,        // groups of similar patches: c1 = tile of groups (sampler/patch_groups.h)
  kRedraw = 10,      // values redrawn between sweeps: missing pixels, impulses, unequal noise
  kRecheck = 11,     // noise of the recalibration runs
  kSplitNoise = 12,  // noise that splits an image in two: one normal a pixel
  // Labels seen through blur, one word a pixel: c0 = x >> 2, c1 = y (sampler/blurred_sweep.h).
  kBlurredLabels = 13,
  kBlur = 14,       // proposals of the blur
  kBootstrap = 15,  // noise of simulated images: c0 = place in the row, c2 = row
  kReplicate = 16   // images drawn to check a model: c0, c1 = pixel, block
                    // (diagnose/residual_block.h)
};

inline constexpr std::uint32_t kMaxSlices = 1u << 24;

// Fourth counter word.
constexpr std::uint32_t counter_word3(Purpose purpose, std::uint32_t colour, std::uint32_t slice) {
  return slice << 8 | static_cast<std::uint32_t>(purpose) << 3 | colour;
}

// Word of the pixel at (row, column) of one colour's plane.
constexpr std::uint32_t pixel_word(PhiloxKey key, std::uint32_t row, std::uint32_t column,
                                   std::uint32_t sweep, std::uint32_t word3) {
  const PhiloxCounter x = philox4x32({column >> 1, row >> 1, sweep, word3}, key);
  return x[(row & 1) * 2 + 1 - (column & 1)];
}

// Key of one chain of one image. Chains of an image never share a key.
constexpr PhiloxKey chain_key(std::uint64_t image_seed, std::uint32_t chain) {
  return {static_cast<std::uint32_t>(image_seed),
          static_cast<std::uint32_t>(image_seed >> 32) ^ chain};
}

// Seed of one image: the user's seed mixed with the content of the file (any digest of it) and
// the page, so that images of one folder do not share random numbers and a renamed file keeps its.
std::uint64_t image_seed(std::uint64_t seed, std::span<const std::uint8_t> digest,
                         std::uint32_t page);

}  // namespace stillfield

#endif  // STILLFIELD_RANDOM_COUNTERS_H_
