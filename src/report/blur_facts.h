// What the record of a label field says about the optics' blur.
#ifndef STILLFIELD_REPORT_BLUR_FACTS_H_
#define STILLFIELD_REPORT_BLUR_FACTS_H_

#include <limits>

namespace stillfield {

// Standard deviations in pixels; NaN when blur was not asked for.
struct BlurFacts {
  double value = std::numeric_limits<double>::quiet_NaN();
  double lower90 = std::numeric_limits<double>::quiet_NaN();
  double upper90 = std::numeric_limits<double>::quiet_NaN();
  bool estimated = false;
  bool modelled = false;  // the labels were sampled with it
};

}  // namespace stillfield

#endif  // STILLFIELD_REPORT_BLUR_FACTS_H_
