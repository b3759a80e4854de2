// What the record of a label field says about uneven light.
#ifndef STILLFIELD_REPORT_SHADING_FACTS_H_
#define STILLFIELD_REPORT_SHADING_FACTS_H_

#include <limits>

namespace stillfield {

// Of the surface whose mean over the frame is one. NaN where shading was not asked for, and all
// but `first_span` where it was not modelled.
struct ShadingFacts {
  int coefficients = 0;  // along a side; 0: not asked for
  bool modelled = false;
  double first_span = std::numeric_limits<double>::quiet_NaN();  // of the first fit
  double lowest = std::numeric_limits<double>::quiet_NaN();      // of the posterior mean
  double highest = std::numeric_limits<double>::quiet_NaN();
  double mean_sd = std::numeric_limits<double>::quiet_NaN();     // posterior, root mean square
  double largest_sd = std::numeric_limits<double>::quiet_NaN();  // over the frame
};

}  // namespace stillfield

#endif  // STILLFIELD_REPORT_SHADING_FACTS_H_
