// One Markov chain over intensity fields and its sweeps.
//
// Maths    y_s | x_s ~ N(x_s, sigma^2 / p_s); x ~ smooth or edges (model/intensity_draws.h).
//          A sweep: every pixel once, colour by colour, from its full conditional
//          (simd/intensity_rows.h); `edges` first draws the scales of the pairs
//          (simd/intensity_pairs.h); then strength and noise from their conditionals.
// Units    grey values are centred (intensity_observed.h)
// Bytes    the same for any number of threads and any CPU target
#ifndef STILLFIELD_SAMPLER_INTENSITY_CHAIN_H_
#define STILLFIELD_SAMPLER_INTENSITY_CHAIN_H_

#include <cstdint>

#include "core/aligned_buffer.h"
#include "core/volume.h"
#include "model/intensity_draws.h"
#include "parallel/pool.h"
#include "random/counters.h"
#include "sampler/intensity_observed.h"

namespace stillfield {

struct IntensityModel {
  IntensityPrior prior = IntensityPrior::kSmooth;
  bool noise_scale_known = false;
  ShapeRate strength;  // hyperparameters of lambda or tau
  ShapeRate noise;     // and of sigma^2
};

struct IntensityChain {
  PhiloxKey key{};
  std::uint32_t sweeps_done = 0;
  double strength = 1.0;        // lambda or tau
  double noise_variance = 1.0;  // sigma^2
  AlignedBuffer<float> field;
  AlignedBuffer<float> value;           // redrawn y - centre; empty: those of the image
  AlignedBuffer<float> pair_precision;  // edges only
  // Sums of x - shift and its square over the last `pending` sweeps; empty: no moments.
  AlignedBuffer<float> sum, square;
  int pending = 0;
};

// A chain that starts from the given field and parameters.
IntensityChain start_intensity_chain(const ObservedIntensity& observed, IntensityPrior prior,
                                     PhiloxKey key, View<const float> start, double strength,
                                     double noise_variance);

// S of the whole field: weighted squared (smooth) or absolute (edges) differences.
double sum_differences(const ObservedIntensity& observed, IntensityPrior prior, const Pool& pool,
                       IntensityChain& chain);
// R: squared residuals of observed pixels, over their given variances.
double sum_residuals(const ObservedIntensity& observed, IntensityPrior prior, const Pool& pool,
                     IntensityChain& chain);

// All pixels (and pair scales) once, given the parameters. `shift` is the plane that moments are
// taken about; not looked at when the chain has no moments.
void sweep_intensity(const ObservedIntensity& observed, IntensityPrior prior,
                     const AlignedBuffer<float>& shift, const Pool& pool, IntensityChain& chain);

// Strength and noise given the field.
void draw_intensity_parameters(const ObservedIntensity& observed, const IntensityModel& model,
                               const Pool& pool, IntensityChain& chain);

}  // namespace stillfield

#endif  // STILLFIELD_SAMPLER_INTENSITY_CHAIN_H_
