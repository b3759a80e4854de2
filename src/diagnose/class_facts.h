// Facts about classes and pixels that need no test against chance. Limits in class_facts.cc are
// common practice, no source.
//
//   class_contrast     for k = 1..K-1: (mean_{k+1} - mean_k) / sqrt((sd_k^2 + sd_{k+1}^2) / 2)
//   class_persistence  sum_s p_k(s)^2 / sum_s p_k(s): the probability that a pixel of class k in
//                      one draw has it in another as well. Near 1 for a class that the image
//                      supports, near its share for one that splits noise
//   class_share        sum_s p_k(s) / pixels; both over observed pixels
//   saturation         share of the class's pixels at the smallest or largest grey level, whichever
//                      is more; expected: what its normal distribution puts on that level
//   uncertain_pixels, missing_pixels   shares of the image
// Shapes   maps of equal extent; labels 1..K
#ifndef STILLFIELD_DIAGNOSE_CLASS_FACTS_H_
#define STILLFIELD_DIAGNOSE_CLASS_FACTS_H_

#include <cstdint>
#include <vector>

#include "core/volume.h"
#include "diagnose/model_check.h"
#include "model/grey_levels.h"
#include "model/label_model.h"

namespace stillfield {

std::vector<ModelCheck> contrast_facts(const GaussianClasses& classes);

// Share and persistence of one class from its probability map.
std::vector<ModelCheck> support_facts(const GreyLevels& grey, int label,
                                      const Volume<float>& probability);

std::vector<ModelCheck> saturation_facts(const GreyLevels& grey, View<const std::uint8_t> labels,
                                         const GaussianClasses& classes);

// region_pixels: of the image, or of its region of interest.
std::vector<ModelCheck> share_facts(const GreyLevels& grey, std::int64_t region_pixels,
                                    double uncertain_share);

}  // namespace stillfield

#endif  // STILLFIELD_DIAGNOSE_CLASS_FACTS_H_
