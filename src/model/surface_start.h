// A first fit of uneven light, before any label is known.
//
// Maths    block averages v of the image follow a mixture, v ~ sum_k pi_k N(g mu_k, s^2) with one
//          s, each independent of the others: expectation-maximisation alternates between classes
//          and surface (as Wells, Grimson, Kikinis & Jolesz 1996, there on logarithms), the
//          surface under the prior of surface_draw.h
// Starts   a mixture split along the light is a local optimum: fits start from even light and
//          from surfaces through the 10, 50 and 90 % quantiles and the means of 8 x 8 tiles; the
//          best penalised likelihood wins
// Blocks   squares of at least 2 pixels, so that at most some kCoarse of them lie along a side
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
