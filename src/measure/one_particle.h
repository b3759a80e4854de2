// What particles that may or may not be there would change: a floor under the uncertainty of counts
// and sizes.
//
// Why      whether a particle touches the frame, or two are one, can hang on a pixel, and particles
//          just too small to be told from noise are never found. A handful of simulations in which
//          it happens not to change says nothing about such steps
// Maths    particle_count: w (w / 4 + n), w the mean weight of a particle and n the weighted number
//          of those with an area below twice the least clear area: half a particle, and as many
//          more or less as there are doubtful ones (Poisson)
//          mean_particle_area, d10, d50, d90: mean squared change by one particle: half from
//          leaving one out in turn, half from one more of the least clear area. To be multiplied by
//          the variance of the number
// Output   one a key of measure_labels, in its order and squared units; 0 without a particle inside
//          the frame, and for all other measurements
#ifndef STILLFIELD_MEASURE_ONE_PARTICLE_H_
#define STILLFIELD_MEASURE_ONE_PARTICLE_H_

#include <cstdint>
#include <vector>

#include "core/volume.h"
#include "measure/label_measures.h"

namespace stillfield {

// Labels 1..K; `least_area[k - 1]` is of class k, in pixels (measure/label_cleaning.h).
std::vector<double> one_particle_variances(View<const std::uint8_t> labels,
                                           View<const std::uint8_t> usable,
                                           const LabelMeasureSettings& settings,
                                           const std::vector<double>& least_area);

}  // namespace stillfield

#endif  // STILLFIELD_MEASURE_ONE_PARTICLE_H_
