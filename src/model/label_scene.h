// The grey image that a label image would give: class means, blurred by the optics, and noise.
//
// Model    y = h * m(z) + sd_{z} e,  m(z)_s = mean of class z_s, h a Gaussian of standard deviation
//          `blur` px, cut off and renormalised at the frame; e standard normal
// Fit      mean: least squares of y on the blurred indicators of the classes, over observed
//          pixels (of the middle rows when the planes of all classes would take over 64 MB); sd:
//          root mean square residual over the pixels of a class, over all pixels for classes of
//          fewer than kFewPixelsOfAClass
// Units    grey values of the file, pixels
#ifndef STILLFIELD_MODEL_LABEL_SCENE_H_
#define STILLFIELD_MODEL_LABEL_SCENE_H_

#include <cstdint>

#include "core/volume.h"
#include "model/grey_levels.h"
#include "model/label_model.h"
#include "random/philox.h"

namespace stillfield {

inline constexpr int kFewPixelsOfAClass = 50;

// Labels 1..K; a class without pixels keeps the mean and sd of `start`.
GaussianClasses fit_scene(const GreyLevels& grey, View<const std::uint8_t> labels, double blur,
                          const GaussianClasses& start);

// One image of the scene on the grey levels of `like`, with the same missing pixels. Values beyond
// the range of the levels take the nearest. Random numbers: one stream a row.
GreyLevels simulate_scene(const GreyLevels& like, View<const std::uint8_t> labels, double blur,
                          const GaussianClasses& classes, PhiloxKey key);

// Gaussian blur of a plane; 0: a copy.
Volume<double> blurred(const Volume<double>& plane, double sd);

}  // namespace stillfield

#endif  // STILLFIELD_MODEL_LABEL_SCENE_H_
