// A small field as the program holds it, with a model of choice, and the same as plain numbers.
#ifndef STILLFIELD_TESTS_EXACTNESS_TEST_FIELD_H_
#define STILLFIELD_TESTS_EXACTNESS_TEST_FIELD_H_

#include <cstdint>
#include <vector>

#include "exactness/gibbs_field.h"
#include "sampler/sweep.h"

namespace stillfield::exactness {

// Grey values origin + step * level; a level equal to `levels` is missing.
struct FieldSpec {
  int width = 3, height = 3;
  Connectivity connectivity = Connectivity::kFour;
  std::vector<std::uint16_t> level;  // image order
  int levels = 256;
  double origin = 0.0, step = 1.0;
  LabelModel model;
  std::uint64_t seed = 1;
};

// Random levels, some missing; classes that overlap widely, so that every label of every pixel is
// likely enough to be seen; random class field and deviations.
FieldSpec random_spec(int width, int height, Connectivity connectivity, int classes, double beta,
                      std::uint64_t seed);

// A field without data and without class field.
FieldSpec empty_spec(int width, int height, int classes, double beta, std::uint64_t seed);

GibbsField plain_field(const FieldSpec& spec);

class TestField {
 public:
  explicit TestField(const FieldSpec& spec);  // starts from independent uniform labels
  TestField(const TestField&) = delete;
  TestField& operator=(const TestField&) = delete;

  // Takes over the chain's model: weights are refilled.
  void prepare() { prepare_weights(field, chain.model, serial, weights); }
  void sweep(int sweeps = 1) {
    sweep_labels(colouring, weights, sweeps, Purpose::kLabels, serial, chain);
  }
  void total() { total_labels(field, serial, chain); }
  double pairs_now();  // S(z) of the current labels
  void start_counting();
  // Visits of each pixel to class k > 0 since they were last emptied, [pixel].
  std::vector<int> visits(int k) const;
  void empty_visits();
  Labels labels() const;
  void set_labels(const Labels& labels);

  Pool serial;
  GreyLevels grey;
  Colouring colouring;
  ObservedField field;
  WeightPlanes weights;
  LabelChain chain;
};

}  // namespace stillfield::exactness

#endif  // STILLFIELD_TESTS_EXACTNESS_TEST_FIELD_H_
