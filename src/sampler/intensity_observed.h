// The noisy image as the sampler of intensity fields sees it; shared by all chains.
//
// Units    grey values with `centre`, the mean of the observed ones, taken off: floats then keep
//          their digits for what varies
// Errors   see observe_intensity
#ifndef STILLFIELD_SAMPLER_INTENSITY_OBSERVED_H_
#define STILLFIELD_SAMPLER_INTENSITY_OBSERVED_H_

#include <cstdint>
#include <map>
#include <vector>

#include "core/aligned_buffer.h"
#include "core/volume.h"
#include "sampler/intensity_layout.h"

namespace stillfield {

struct ObservedIntensity {
  const IntensityLayout* layout = nullptr;
  double centre = 0.0;
  std::int64_t observed = 0;       // pixels with p > 0
  AlignedBuffer<float> value;      // y - centre; 0 where missing
  AlignedBuffer<float> precision;  // p
  std::vector<IntensityRow> row;   // by IntensityLayout::row_number
  // Rows that many of `row` share: total weights by what lies beyond the border, precisions
  // that are the same all along.
  std::map<std::vector<float>, AlignedBuffer<float>> shared_rows;
};

// value: any units. variance: of the noise of each pixel, > 0, infinity where the pixel is missing
// (its value is then not looked at). With an unknown noise scale, variances are relative.
// Throws Error(kInput) when no pixel is observed or an observed value is not finite.
ObservedIntensity observe_intensity(const IntensityLayout& layout, View<const float> value,
                                    View<const float> variance);

// Writes y - centre of the observed pixels; the others keep what `plane` holds.
void centre_values(const ObservedIntensity& observed, View<const float> value,
                   AlignedBuffer<float>& plane);

}  // namespace stillfield

#endif  // STILLFIELD_SAMPLER_INTENSITY_OBSERVED_H_
