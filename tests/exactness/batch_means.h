// Mean of a correlated series and its Monte Carlo standard error, by batch means.
//
// Maths    mcse = sd of the batches' means / sqrt(number of batches), for batches of equal length
//          much longer than the autocorrelation time (Geyer 1992; Flegal & Jones 2010)
#ifndef STILLFIELD_TESTS_EXACTNESS_BATCH_MEANS_H_
#define STILLFIELD_TESTS_EXACTNESS_BATCH_MEANS_H_

#include <cstdint>
#include <vector>

namespace stillfield::exactness {

struct Estimate {
  double mean = 0.0;
  double mcse = 0.0;

  // Distance from a known value in standard errors; infinite when the series never moved and is
  // off by more than rounding.
  double deviations(double exact) const;
};

class BatchMeans {
 public:
  explicit BatchMeans(int batch) : batch_(batch) {}

  void add(double value);       // one draw
  void add_batch(double mean);  // a whole batch
  Estimate estimate() const;    // complete batches only, at least 2
  std::int64_t batches() const { return static_cast<std::int64_t>(means_.size()); }

 private:
  int batch_;
  int inside_ = 0;
  double sum_ = 0.0;
  std::vector<double> means_;
};

}  // namespace stillfield::exactness

#endif  // STILLFIELD_TESTS_EXACTNESS_BATCH_MEANS_H_
