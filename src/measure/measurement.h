// One reported quantity of one image: the row of the table of measurements.
//
// Units    estimate, sd, bounds, mcse and plain_estimate in `unit`; rhat and ess have none
// NaN      what is not known; rhat and ess of a quantity that is the same in every draw
#ifndef STILLFIELD_MEASURE_MEASUREMENT_H_
#define STILLFIELD_MEASURE_MEASUREMENT_H_

#include <limits>
#include <string>

namespace stillfield {

struct Measurement {
  std::string name;  // "area_fraction", "particle_count", "d50", ...
  int label = 0;     // class 1..K by rising mean; 0 = whole image
  std::string unit;  // "1" for pure numbers
  double estimate = std::numeric_limits<double>::quiet_NaN();
  double sd = std::numeric_limits<double>::quiet_NaN();
  double lower90 = std::numeric_limits<double>::quiet_NaN();
  double upper90 = std::numeric_limits<double>::quiet_NaN();
  double lower95 = std::numeric_limits<double>::quiet_NaN();
  double upper95 = std::numeric_limits<double>::quiet_NaN();
  double mcse = std::numeric_limits<double>::quiet_NaN();
  double rhat = std::numeric_limits<double>::quiet_NaN();
  double ess = std::numeric_limits<double>::quiet_NaN();             // smaller of bulk and tail
  double plain_estimate = std::numeric_limits<double>::quiet_NaN();  // before any bootstrap
  double defined_share =
      std::numeric_limits<double>::quiet_NaN();  // of the draws: see from_trace.h
};

}  // namespace stillfield

#endif  // STILLFIELD_MEASURE_MEASUREMENT_H_
