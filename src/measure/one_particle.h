// What one particle more or less would change: the floor under the uncertainty of counts and sizes.
//
// Why      whether a particle touches the frame, or two are one, can hang on a pixel. A handful of
//          simulations in which it happens not to change says nothing about such steps
// Maths    particle_count: (mean weight of a particle / 2)^2, half a particle;
//          mean_particle_area, d10, d50, d90: a quarter of the mean squared change when one
//          particle is left out; 0 with fewer than two particles inside the frame, and for all
//          other measurements
// Output   variances in squared units of measure_labels, one a key, in its order
#ifndef STILLFIELD_MEASURE_ONE_PARTICLE_H_
#define STILLFIELD_MEASURE_ONE_PARTICLE_H_

#include <cstdint>
#include <vector>

#include "core/volume.h"
#include "measure/label_measures.h"

namespace stillfield {

std::vector<double> one_particle_variances(View<const std::uint8_t> labels,
                                           View<const std::uint8_t> usable,
                                           const LabelMeasureSettings& settings);

}  // namespace stillfield

#endif  // STILLFIELD_MEASURE_ONE_PARTICLE_H_
