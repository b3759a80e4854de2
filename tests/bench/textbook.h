// The Gibbs sweep as textbooks write it: row by row, mt19937, std::exp. The yardsticks of
// docs/speed.md, compiled with everything the compiler can do for the machine they run on.
//
// sweep()        evaluates each class's Gaussian and coupling at each pixel: one std::exp a class
// sweep_tuned()  the same with log-likelihoods from a table over grey levels and, for two labels,
//                one std::exp of the difference: what a careful scalar programmer would write
// Borders are a guard frame in both.
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
  void sweep_tuned();
  double sites() const { return static_cast<double>(width_) * height_; }

 private:
  void sweep_two();
  template <class LogWeight>
  void sweep_classes(const LogWeight& log_weight);
  int equal_neighbours(const std::uint8_t* site, int k) const;

  int width_, height_, stride_;
  int classes_, neighbours_;
  double beta_;
  LabelModel model_;
  std::vector<double> log_sd_;
  std::vector<double> value_;       // grey value of each pixel
  std::vector<double> log_weight_;  // [level * classes + k]
  std::vector<std::uint16_t> level_;
  std::vector<std::uint8_t> label_;  // with a frame of a label no class has
  std::vector<int> offset_;
  std::mt19937 engine_{1};
};

}  // namespace stillfield::bench

#endif  // STILLFIELD_TESTS_BENCH_TEXTBOOK_H_
