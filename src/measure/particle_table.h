// The particles of the most probable labels, one by one: how likely each is, and how large.
//
// Particle     component of one class (measure/particles.h). One that reaches from a side of the
//              frame (of the bounding box of the usable pixels) to the opposite side is a matrix,
//              not a particle, and is left out. Components
//              smaller than min_area are no particles, in draws neither
// There        in a draw: a component of the class in that draw holds more than half of the
//              particle's pixels, and more than half of the component's pixels lie in the particle.
//              So each component stands for at most one particle: of two that have grown together
//              in a draw the larger is there, with the area of both
// Probability  share of the draws in which it is there; its Monte Carlo error is at most .035 for
//              200 independent draws
// Area         of that component: mean and 90 % interval (type 7 quantiles) over the draws in which
//              the particle is there; NaN if there is none
// Units        pixels, grey values
#ifndef STILLFIELD_MEASURE_PARTICLE_TABLE_H_
#define STILLFIELD_MEASURE_PARTICLE_TABLE_H_

#include <cstdint>
#include <limits>
#include <vector>

#include "core/volume.h"
#include "measure/label_measures.h"
#include "measure/particles.h"

namespace stillfield {

struct ParticleRow {
  int label = 0;      // class 1..K
  Particle particle;  // in the most probable labels; `component` counts rows of its class from 1
  double mean_intensity = std::numeric_limits<double>::quiet_NaN();  // of its observed pixels
  double probability = std::numeric_limits<double>::quiet_NaN();
  double area_mean = std::numeric_limits<double>::quiet_NaN();
  double area_lower90 = std::numeric_limits<double>::quiet_NaN();
  double area_upper90 = std::numeric_limits<double>::quiet_NaN();
};

class ParticleTable {
 public:
  // Labels, grey values and usable pixels as in measure_labels(); they are not kept.
  ParticleTable(View<const std::uint8_t> labels, View<const float> grey,
                View<const std::uint8_t> usable, const LabelMeasureSettings& settings, int chains);

  // The particles of one class in a draw. Different chains may record at the same time.
  void record(int chain, int label, const Particles& drawn);

  // By class, then in row order of the first pixels. `draws`: of all chains together.
  std::vector<ParticleRow> rows(int draws) const;

 private:
  void add_class(int label, const Particles& found, View<const float> grey, const Particle& frame);

  std::vector<ParticleRow> rows_;
  std::vector<std::size_t> first_;  // row of the first particle of class k at [k - 1]; then the end
  Volume<std::int32_t> row_at_;     // number of the row of each pixel's particle, from 1; 0: none
  std::vector<std::vector<std::vector<std::int64_t>>> areas_;  // [chain][row]: where there
};

}  // namespace stillfield

#endif  // STILLFIELD_MEASURE_PARTICLE_TABLE_H_
