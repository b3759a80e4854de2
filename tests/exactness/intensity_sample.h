// An intensity chain on plain arrays, and series of its pixels.
#ifndef STILLFIELD_TESTS_EXACTNESS_INTENSITY_SAMPLE_H_
#define STILLFIELD_TESTS_EXACTNESS_INTENSITY_SAMPLE_H_

#include <vector>

#include "exactness/batch_means.h"
#include "sampler/intensity_chain.h"

namespace stillfield::exactness {

// Pixels x fastest. An infinite variance marks a missing pixel.
struct IntensityProblem {
  int width = 0, height = 0;
  Connectivity connectivity = Connectivity::kFour;
  IntensityModel model;
  std::vector<double> value, variance;
};

class IntensitySample {
 public:
  IntensitySample(const IntensityProblem& problem, PhiloxKey key, double strength,
                  double noise_variance);
  IntensitySample(const IntensitySample&) = delete;
  IntensitySample& operator=(const IntensitySample&) = delete;

  void sweep();            // the field
  void draw_parameters();  // strength and noise
  std::vector<double> pixels() const;
  double differences();  // S
  double residuals();    // R

  IntensityModel model;
  IntensityLayout layout;
  ObservedIntensity observed;
  IntensityChain chain;
  Pool pool{1};
};

// Mean and mean square of every pixel over `sweeps` sweeps at fixed parameters.
struct PixelMoments {
  std::vector<BatchMeans> mean;
  std::vector<BatchMeans> square;  // of the distance from `about`
};
PixelMoments sample_pixels(IntensitySample& sample, const std::vector<double>& about, int sweeps,
                           int batch);

}  // namespace stillfield::exactness

#endif  // STILLFIELD_TESTS_EXACTNESS_INTENSITY_SAMPLE_H_
