// Starting labels and classes: a Gaussian mixture of the image averaged over small squares.
//
// At a low contrast-to-noise ratio the histogram of single pixels has one hump, and no mixture can
// tell the classes apart; averaged over (2 r + 1)^2 pixels the noise falls 2 r + 1 times while most
// pixels keep their class. Labels come from the averaged image, class means and standard
// deviations from the original pixels under those labels.
#ifndef STILLFIELD_MODEL_SMOOTHED_START_H_
#define STILLFIELD_MODEL_SMOOTHED_START_H_

#include <cstdint>

#include "core/volume.h"
#include "model/grey_levels.h"
#include "model/label_model.h"

namespace stillfield {

struct LabelStart {
  Volume<std::uint8_t> labels;  // 0-based classes by rising mean
  GaussianClasses classes;
};

// radius >= 0 (0: the pixels themselves). Missing pixels do not enter the averages.
// Throws Error(kInput) when fewer than `classes` grey levels occur.
LabelStart smoothed_start(const GreyLevels& grey, int classes, int radius, bool shared_variance);

}  // namespace stillfield

#endif  // STILLFIELD_MODEL_SMOOTHED_START_H_
