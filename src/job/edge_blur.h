// The blur of an image, by simulated images with the same share of contrast lost at their borders.
//
// Method   for blurs of kTriedBlurs px: simulate images from the labels found, analyse each by a
//          short run, take the mean edge leak (measure/edge_leak.h); the leak of the image itself
//          is found between these by linear interpolation (indirect inference: Gourieroux,
//          Monfort & Renault 1993). Values below kSmallestSeenBlur count as no blur
// Window   of large images the middle kBlurWindow^2 pixels
// Output   standard deviation of a Gaussian in pixels, 0 .. the largest tried
#ifndef STILLFIELD_JOB_EDGE_BLUR_H_
#define STILLFIELD_JOB_EDGE_BLUR_H_

#include <array>
#include <cstdint>

#include "job/short_run.h"

namespace stillfield {

inline constexpr std::array<double, 4> kTriedBlurs{0.0, 0.5, 1.0, 1.5};
inline constexpr int kBlurReplicates = 3;  // at each
inline constexpr double kSmallestSeenBlur = 0.3;
inline constexpr int kBlurWindow = 320;

// `labels`: most probable, 1..K. `image_seed` keys the simulated noise.
double blur_from_edges(const GreyLevels& grey, View<const std::uint8_t> labels,
                       const LabelModel& model, const ShortRunSettings& settings,
                       std::uint64_t image_seed, const Pool& pool);

// Where a leak lies between those of kTriedBlurs.
double interpolate_blur(double leak, std::array<double, 4> leaks);

}  // namespace stillfield

#endif  // STILLFIELD_JOB_EDGE_BLUR_H_
