// An image as at most 65 535 equally spaced grey levels.
//
// Likelihoods then are tables over levels, and class sums are exact integers whatever the order
// they are added in. Images of integers that span less than 65 535 keep every value; others are
// rounded to the nearest of 65 535 levels between their smallest and largest value.
//
// Value     origin + step * level, in the file's grey values
// Missing   NaN and infinite pixels get level `levels`, which no grey value has
// Outliers  when a few pixels stretch the range beyond 50 times the span from the 0.1 % to the
//           99.9 % quantile, values are clipped to 25 spans on either side, and a note says so
#ifndef STILLFIELD_MODEL_GREY_LEVELS_H_
#define STILLFIELD_MODEL_GREY_LEVELS_H_

#include <cstdint>
#include <string>
#include <vector>

#include "core/volume.h"

namespace stillfield {

struct GreyLevels {
  Volume<std::uint16_t> level;
  double origin = 0.0;
  double step = 1.0;
  int levels = 0;                       // 1..65535
  std::vector<std::int64_t> histogram;  // pixels at each level, without missing ones
  std::int64_t observed = 0;            // pixels that are not missing
  std::vector<std::string> notes;

  double value(int l) const { return origin + step * l; }
  std::uint16_t missing() const { return static_cast<std::uint16_t>(levels); }
  int distinct() const;  // levels that occur
};

// Throws Error(kInput) when every pixel is missing; the caller adds the file's name.
GreyLevels make_grey_levels(View<const float> pixels);

// The grey value of every pixel; NaN where it is missing.
Volume<float> grey_values(const GreyLevels& grey);

}  // namespace stillfield

#endif  // STILLFIELD_MODEL_GREY_LEVELS_H_
