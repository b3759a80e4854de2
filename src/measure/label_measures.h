// Everything that is measured on one label image: a draw, the most probable labels, or a truth.
//
// For each class 1..K, in this order:
//   area_fraction        share of the usable pixels
//   interface_length     border of the class inside the frame (measure/interface_length.h)
//   particle_count       border-corrected number of particles (measure/particles.h)
//   mean_particle_area   NaN without a particle inside the frame, as are the next three
//   d10, d50, d90        number percentiles of the equivalent circular diameter
//   mean_intensity       mean grey value of the class's pixels; NaN for an empty class
// Units   pixels ("px", "px^2"), or micrometres ("um", "um^2") when the pixel size is known;
//         grey values of the file
#ifndef STILLFIELD_MEASURE_LABEL_MEASURES_H_
#define STILLFIELD_MEASURE_LABEL_MEASURES_H_

#include <cstdint>
#include <functional>
#include <limits>
#include <string>
#include <vector>

#include "core/volume.h"
#include "measure/particles.h"

namespace stillfield {

struct LabelMeasureSettings {
  int classes = 2;
  ParticleSettings particles;
  double pixel_size_um = std::numeric_limits<double>::quiet_NaN();  // NaN: unknown
};

struct MeasureKey {
  std::string name;
  int label = 0;  // class 1..K
  std::string unit;
};

// What measure_labels measures, in its order.
std::vector<MeasureKey> measure_keys(const LabelMeasureSettings& settings);

// Shown the particles of each class in turn, for those who need more of them.
using ParticleVisit = std::function<void(int label, const Particles& particles)>;

// One value a key. Planes of equal extent; labels are 1..K; an empty `usable`: all pixels are;
// `grey` may hold NaN where nothing was observed.
std::vector<double> measure_labels(View<const std::uint8_t> labels, View<const float> grey,
                                   View<const std::uint8_t> usable,
                                   const LabelMeasureSettings& settings,
                                   const ParticleVisit& visit = {});

}  // namespace stillfield

#endif  // STILLFIELD_MEASURE_LABEL_MEASURES_H_
