// A first estimate of the optics' blur from an image and its labels.
//
// Labels   sampled without regard to blur, a class between two others lines their border. So labels
//          that no 3 x 3 block of their own class covers are given to the class of such a block
//          near by (5 x 5) whose mean is nearest to the pixel: thin rims and lines go, and the
//          chains bring back what the data ask for
// Maths    profile likelihood over b: RSS(b) = min over mu of sum_t w_t (y_t - (h_b * mu_z)(t))^2,
//          b in steps of kStep, the minimum by a parabola
// Bias     upwards when noise makes the labels ragged: a value under kNoBlur settles that there is
//          none, larger ones need the chains (blurred_chain.h)
#ifndef STILLFIELD_SAMPLER_BLUR_SEARCH_H_
#define STILLFIELD_SAMPLER_BLUR_SEARCH_H_

#include "model/grey_levels.h"
#include "model/label_model.h"

namespace stillfield {

// Labels 0-based, changed in place.
void absorb_thin_labels(const GreyLevels& grey, const GaussianClasses& classes,
                        Volume<std::uint8_t>& labels);

// In pixels, kSmallestBlur .. 2.5.
double search_blur(const GreyLevels& grey, int classes, const Volume<std::uint8_t>& labels);

}  // namespace stillfield

#endif  // STILLFIELD_SAMPLER_BLUR_SEARCH_H_
