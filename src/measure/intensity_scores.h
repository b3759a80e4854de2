// How well restored intensities and their intervals agree with a known truth.
//
// Maths     PSNR      10 log10(peak^2 / mean squared error), in dB
//           SSIM      structural similarity (Wang, Bovik, Sheikh & Simoncelli 2004): Gaussian
//           window
//                     of standard deviation 1.5 cut at 3.5 of them, K1 = .01, K2 = .03, population
//                     moments, mean over the pixels whose window lies inside
//           coverage  share of pixels whose truth lies in their interval; also on the tenth of the
//                     pixels with the largest gradient (Sobel) of the truth
// NaN       pixels whose truth is not a number do not count (SSIM needs all of them)
#ifndef STILLFIELD_MEASURE_INTENSITY_SCORES_H_
#define STILLFIELD_MEASURE_INTENSITY_SCORES_H_

#include <cstdint>

#include "core/volume.h"

namespace stillfield {

struct IntensityScores {
  std::int64_t pixels = 0;
  double rmse = 0;
  double mean_error = 0;  // restored - truth
  double psnr = 0;        // infinite for equal images
  double ssim = 0;        // NaN for images smaller than the window
  double coverage90 = 0;
  double coverage90_at_edges = 0;
  double mean_width90 = 0;
};

// `peak` is the range of the sample type or of the truth.
IntensityScores score_intensities(View<const float> restored, View<const float> lower90,
                                  View<const float> upper90, View<const float> truth, double peak);

// Whole-image SSIM of two planes of equal size.
double structural_similarity(View<const float> a, View<const float> b, double peak);

}  // namespace stillfield

#endif  // STILLFIELD_MEASURE_INTENSITY_SCORES_H_
