// Mean and variance of a list of numbers.
//
// Maths    variance = sum (x - mean)^2 / (n - 1), in two passes
// Output   NaN for the mean of nothing and for the variance of fewer than two values; a list of
//          equal values has exactly that mean and variance exactly 0
#ifndef STILLFIELD_DIAGNOSE_MOMENTS_H_
#define STILLFIELD_DIAGNOSE_MOMENTS_H_

#include <cstdint>
#include <span>

namespace stillfield {

double mean_of(std::span<const double> values);
double variance_of(std::span<const double> values);

// The same of a list that is never kept: the mean is that of mean_of() to the last bit, the
// variance follows Welford (1962), Technometrics 4.
class RunningMoments {
 public:
  void add(double value);
  std::int64_t count() const { return count_; }
  double mean() const;
  double variance() const;

 private:
  std::int64_t count_ = 0;
  double first_ = 0;
  double sum_ = 0;  // of differences from the first value
  double centre_ = 0;
  double squares_ = 0;
};

}  // namespace stillfield

#endif  // STILLFIELD_DIAGNOSE_MOMENTS_H_
