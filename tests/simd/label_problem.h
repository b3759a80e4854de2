// The same label field twice: as the program lays it out, and as the slow twin holds it.
#ifndef STILLFIELD_TESTS_SIMD_LABEL_PROBLEM_H_
#define STILLFIELD_TESTS_SIMD_LABEL_PROBLEM_H_

#include <cstdint>
#include <vector>

#include "parallel/pool.h"
#include "reference/label_field.h"
#include "sampler/sweep.h"

namespace stillfield::testing {

struct LabelProblem {
  Extent extent;
  Connectivity connectivity = Connectivity::kFour;
  int classes = 2;
  double beta = 0.8;
  double spacing_z = 1.0;
  Offset offset{};
  int levels = 40;
  std::uint32_t seed = 1;
};

// Random grey levels (one in 50 missing), labels, class means and class field.
struct Subject {
  explicit Subject(const LabelProblem& problem);
  Subject(const Subject&) = delete;
  Subject& operator=(const Subject&) = delete;

  std::vector<std::uint8_t> labels() const;      // image order
  std::vector<std::vector<int>> visits() const;  // [class - 1][pixel]
  void start_counting();
  void sweep(int sweeps, const Pool& pool);

  GreyLevels grey;
  Colouring colouring;
  ObservedField field;
  WeightPlanes weights;
  LabelChain chain;
};

reference::LabelField make_twin(const Subject& subject);

}  // namespace stillfield::testing

#endif  // STILLFIELD_TESTS_SIMD_LABEL_PROBLEM_H_
