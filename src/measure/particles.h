// Particles of one class in a label image: connected components, measured.
//
// Components  4- or 8-connected (OpenCV connectedComponentsWithStats)
// Border      a particle cut by the edge of the region of interest has no size. Those whose
//             bounding box touches the edge are left out, and the others weigh 1 / the chance that
//             a box of their size does not (Miles 1974, Lantuejoul 1980; ISO 13322-1), in whole
//             pixels: W H / ((W - w - 1)(H - h - 1)) in a frame of W x H; other regions in
//             measure/box_places.h. The sum of weights is, in expectation over where the region
//             was laid, the number of particles a region of its area holds
// Units       pixels
#ifndef STILLFIELD_MEASURE_PARTICLES_H_
#define STILLFIELD_MEASURE_PARTICLES_H_

#include <cstdint>
#include <vector>

#include "core/volume.h"

namespace stillfield {

struct ParticleSettings {
  int connectivity = 8;       // 4 or 8
  // Pixels; smaller components are no particles. Draws at high noise are full of specks of 1 to 3
  // pixels, which would outnumber the particles (docs/trust.md).
  std::int64_t min_area = 4;
};

struct Particle {
  int component = 0;  // its number in the component map, from 1
  std::int64_t area = 0;
  int left = 0, top = 0, width = 0, height = 0;
  double x = 0, y = 0;     // centroid, pixel centres at whole numbers
  bool on_border = false;  // its box touches the frame, or what lies outside the region
  double weight = 0;       // 0 on the border
};

struct Particles {
  std::vector<Particle> list;      // in row order of their first pixels
  Volume<std::int32_t> component;  // of each pixel; 0 = other classes and components too small
};

// Labels are 1..K; pixels with `usable` 0 belong to no particle (an empty view: all are usable).
Particles find_particles(View<const std::uint8_t> labels, int label,
                         View<const std::uint8_t> usable, const ParticleSettings& settings);

// Equivalent circular diameter sqrt(4 A / pi).
double equivalent_diameter(double area);

struct ParticleSizes {
  double count = 0;  // sum of weights
  double mean_area = 0;
  double d10 = 0, d50 = 0, d90 = 0;  // weighted number percentiles of the equivalent diameter
};

// NaN for what needs a particle when there is none inside the frame.
ParticleSizes particle_sizes(const std::vector<Particle>& particles);

}  // namespace stillfield

#endif  // STILLFIELD_MEASURE_PARTICLES_H_
