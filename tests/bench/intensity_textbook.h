// The Gibbs sweep of a smooth field as textbooks write it: row by row, mt19937,
// std::normal_distribution. The yardstick of docs/speed.md, compiled with everything the compiler
// can do for the machine it runs on. Borders are a frame of zeros that do not count.
#ifndef STILLFIELD_TESTS_BENCH_INTENSITY_TEXTBOOK_H_
#define STILLFIELD_TESTS_BENCH_INTENSITY_TEXTBOOK_H_

#include <cstdint>
#include <random>
#include <vector>

namespace stillfield::bench {

class IntensityTextbook {
 public:
  // 4 neighbours; `value` x fastest.
  IntensityTextbook(int width, int height, const std::vector<float>& value, double strength,
                    double noise_variance);

  void sweep();
  double sites() const { return static_cast<double>(width_) * height_; }

 private:
  int width_, height_, stride_;
  double strength_, noise_precision_;
  std::vector<double> value_, field_;
  std::mt19937 engine_{1};
};

}  // namespace stillfield::bench

#endif  // STILLFIELD_TESTS_BENCH_INTENSITY_TEXTBOOK_H_
