// Density of the grey values of impulses, as a histogram.
//
// Maths    g(y) = 1/2 uniform + 1/2 histogram of the values found by detection (each weighted by
//          its map value), over kBins equal bins from the least to the largest usable grey value.
//          Salt and pepper show as full end bins, random values as an even histogram; the uniform
//          half keeps values that detection missed possible
// Units    per grey value; 0 outside the range
#ifndef STILLFIELD_MODEL_IMPULSE_DENSITY_H_
#define STILLFIELD_MODEL_IMPULSE_DENSITY_H_

#include <array>
#include <cstdint>

#include "core/volume.h"
#include "model/impulse_detection.h"

namespace stillfield {

class ImpulseDensity {
 public:
  static constexpr int kBins = 64;

  ImpulseDensity() = default;
  // Throws Error(kInput) when no pixel is usable.
  ImpulseDensity(View<const float> image, View<const std::uint8_t> usable, const ImpulseMap& map);

  double operator()(double y) const;
  double range() const { return high_ - low_; }

 private:
  double low_ = 0.0, high_ = 0.0;
  std::array<double, kBins> density_{};
};

}  // namespace stillfield

#endif  // STILLFIELD_MODEL_IMPULSE_DENSITY_H_
