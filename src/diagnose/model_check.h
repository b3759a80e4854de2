// One question put to a result, with its answer: is the image as the model says?
//
// value      what was found; expected: what images drawn from the model give (NaN: no such figure)
// limit      of value - expected, beyond which a departure matters in practice; a check fails only
//            when it is beyond its limit and, where there is a p-value, unlikely as well
// p_value    NaN for facts, which are not tested against chance
// label      the class 1..K it speaks of; 0: the image
// sentence   says what is wrong and what follows from it; empty unless failed
#ifndef STILLFIELD_DIAGNOSE_MODEL_CHECK_H_
#define STILLFIELD_DIAGNOSE_MODEL_CHECK_H_

#include <limits>
#include <string>

namespace stillfield {

struct ModelCheck {
  std::string name;
  int label = 0;
  double value = std::numeric_limits<double>::quiet_NaN();
  double expected = std::numeric_limits<double>::quiet_NaN();
  double limit = std::numeric_limits<double>::quiet_NaN();
  double p_value = std::numeric_limits<double>::quiet_NaN();
  bool failed = false;
  bool grave = false;  // failed by so much that the figures should not be used
  std::string sentence;
};

}  // namespace stillfield

#endif  // STILLFIELD_DIAGNOSE_MODEL_CHECK_H_
