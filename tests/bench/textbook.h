// The Gibbs sweep as textbooks write it: row by row, mt19937, std::exp.
//
// It is the yardstick of docs/speed.md, so it is written with care and compiled for the machine it
// runs on: log-likelihoods come from a table over grey levels, borders are a guard frame, and two
// labels take one exp of the difference, not two.
#ifndef STILLFIELD_TESTS_BENCH_TEXTBOOK_H_
#define STILLFIELD_TESTS_BENCH_TEXTBOOK_H_

#include <cstdint>
#include <random>
#include <vector>

#include "model/grey_levels.h"
#include "model/label_model.h"

namespace stillfield::bench {

class Textbook {
 public:
  // `neighbours` is 4 or 8; labels start at random.
  Textbook(const GreyLevels& grey, const LabelModel& model, int neighbours);

  void sweep();
  double sites() const { return static_cast<double>(width_) * height_; }

 private:
  void sweep_two();
  void sweep_many();
  int equal_neighbours(const std::uint8_t* site, int k) const;

  int width_, height_, stride_;
  int classes_, neighbours_;
  double beta_;
  std::vector<double> log_weight_;   // [level * classes + k]
  std::vector<std::uint16_t> level_;
  std::vector<std::uint8_t> label_;  // with a frame of a label no class has
  std::vector<int> offset_;
  std::mt19937 engine_{1};
};

}  // namespace stillfield::bench

#endif  // STILLFIELD_TESTS_BENCH_TEXTBOOK_H_
