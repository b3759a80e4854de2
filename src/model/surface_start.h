// A first fit of uneven light, before any label is known.
//
// Maths    block averages v of the image, v = g mu_k + s e with one s, under the labels' prior of
//          a coupling beta = 1.2 and no class field: expectation-maximisation alternates between
//          class probabilities, each given those of the four neighbours (mean-field-like, Celeux,
//          Forbes & Peyrard 2003), class means and surface (as Wells, Grimson, Kikinis & Jolesz
//          1996, there on logarithms and without neighbours). The score is the pseudo-likelihood
//          and the surface's prior (surface_draw.h). Without neighbours the fit is four to five
//          times as far off at a noise of 0.7 of the contrast
// Starts   a mixture split along the light is a local optimum: fits start from even light and
//          from surfaces through the 10, 50 and 90 % quantiles and the means of 8 x 8 tiles, each
//          with the coupling switched on at once or slowly; the best score wins
// Blocks   squares of at least 2 pixels, so that at most some 128 of them lie along a side
#ifndef STILLFIELD_MODEL_SURFACE_START_H_
#define STILLFIELD_MODEL_SURFACE_START_H_

#include <vector>

#include "model/grey_levels.h"
#include "model/surface_draw.h"

namespace stillfield {

struct SurfaceStart {
  std::vector<double> coefficients;
  double span = 0.0;  // largest less smallest value of the surface
};

// A plane, classes >= 2. Throws Error(kInput) when fewer than `classes` averages differ.
SurfaceStart start_surface(const GreyLevels& grey, const SurfaceBasis& basis,
                           const SurfacePrior& prior, int classes);

// The image divided by the surface (at least kLeastLight), on grey levels of its own.
inline constexpr double kLeastLight = 0.05;
Volume<float> even_light(View<const float> pixels, const SurfaceBasis& basis,
                         const std::vector<double>& coefficients);

}  // namespace stillfield

#endif  // STILLFIELD_MODEL_SURFACE_START_H_
