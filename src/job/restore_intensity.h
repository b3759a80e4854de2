// Restores one plane or volume by sampling its `smooth` or `edges` intensity field.
//
// Maths    model/intensity_draws.h; sweeps of sampler/intensity_chain.h
// Input    value: any units, looked at where the variance is finite. noise_variance: of each pixel,
//          > 0, infinity where the pixel is missing; if !noise_scale_known, relative variances
//          whose common factor is drawn.
// Output   mean and variance of each pixel of the noise-free image, `samples` draws of it (at least
//          16 sweeps of a chain apart), traces of the parameters, and what is known of convergence
// Stops    when every parameter's trace meets the target (diagnose/verdict.h) and the Monte Carlo
//          error of pixels is at most a tenth of their standard deviation, or at max_sweeps.
//          `quick` asks for R-hat 1.05, 100 effective draws and a fifth instead.
// Redraw   called once a sweep of each chain with the chain's field and variance 0, the field
//          being known inside its chain: an exact step of data augmentation. Chains then run one
//          after the other, and sweep numbers are distinct between chains.
// Errors   Error(kInput) as observe_intensity, Error(kUsage) for bad settings, Error(kInterrupt)
// when
//          progress(sweeps, max_sweeps) returns true
#ifndef STILLFIELD_JOB_RESTORE_INTENSITY_H_
#define STILLFIELD_JOB_RESTORE_INTENSITY_H_

#include <cstdint>
#include <functional>
#include <vector>

#include "diagnose/verdict.h"
#include "posterior/traces.h"
#include "sampler/intensity_moments.h"
#include "sampler/pixel_redraw.h"

namespace stillfield {

struct IntensitySettings {
  IntensityPrior prior = IntensityPrior::kSmooth;
  Connectivity connectivity = Connectivity::kFour;
  double spacing_z = 1.0;
  int chains = 4;         // 2..16
  int max_sweeps = 4000;  // a chain; at least 600
  bool quick = false;
  int samples = 0;
  std::uint64_t seed = 1;  // of the image (random/counters.h)
  bool noise_scale_known = true;
};

struct IntensityFieldResult {
  Volume<float> mean, variance;
  std::vector<Volume<float>> draws;
  std::vector<Trace> traces;  // prior_strength, and noise_scale (a standard deviation) when drawn
  std::vector<NamedSummary> scalars;
  Verdict verdict;
  IntensityQuality pixels;
  int warming_sweeps = 0, sampling_sweeps = 0;
  bool converged = false;
};

IntensityFieldResult sample_intensity_field(const Volume<float>& value,
                                            const Volume<float>& noise_variance,
                                            const IntensitySettings& settings, const Pool& pool,
                                            PixelRedraw* redraw,
                                            const std::function<bool(int, int)>& progress);

}  // namespace stillfield

#endif  // STILLFIELD_JOB_RESTORE_INTENSITY_H_
