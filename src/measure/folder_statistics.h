// One measurement over the n fields (images) of a folder.
//
// Maths    mean, s (divisor n - 1), ci95 = t(0.975, n-1) s / sqrt n, %RA = 100 ci95 / |mean|
//          [ASTM E562, ISO 9042, ASTM E1245: area fraction by point count and image analysis]
//          u = s / sqrt n  [GUM, JCGM 100, type A]. The scatter s between fields already contains
//          the uncertainty within each field: it is not added a second time.
//          within_field_sd = sqrt(mean of the posterior variances), reported beside s
//          n = 1: there is no scatter; u, ci95 and the bounds are those of the field's posterior
// Input    measurements of one name, label and unit; a field whose estimate or sd is not finite (no
//          particle to size, say) is left out and counted
// Output   all in the unit of the measurement, except counts and relative_accuracy (percent). The
//          bounds are mean -+ ci95 as the standards have it: below 0 is possible for a fraction.
//          NaN: s for n = 1, relative_accuracy for mean 0, everything for n = 0
// Errors   Error(kUsage) if the measurements differ in name, label or unit
#ifndef STILLFIELD_MEASURE_FOLDER_STATISTICS_H_
#define STILLFIELD_MEASURE_FOLDER_STATISTICS_H_

#include <cstdint>
#include <limits>
#include <optional>
#include <span>
#include <string>
#include <utility>

#include "diagnose/moments.h"
#include "measure/measurement.h"

namespace stillfield {

inline constexpr const char* kBetweenFields = "between fields";
inline constexpr const char* kOneField = "one field: posterior only";
inline constexpr const char* kNoField = "no field";

struct FolderStatistics {
  std::string name;
  int label = 0;
  std::string unit;
  std::int64_t fields = 0;    // n
  std::int64_t left_out = 0;  // fields without a finite value
  double mean = std::numeric_limits<double>::quiet_NaN();
  double s = std::numeric_limits<double>::quiet_NaN();
  double standard_uncertainty = std::numeric_limits<double>::quiet_NaN();
  double ci95 = std::numeric_limits<double>::quiet_NaN();  // half-width
  double lower95 = std::numeric_limits<double>::quiet_NaN();
  double upper95 = std::numeric_limits<double>::quiet_NaN();
  double relative_accuracy = std::numeric_limits<double>::quiet_NaN();  // %RA
  double within_field_sd = std::numeric_limits<double>::quiet_NaN();
  std::string basis = kNoField;  // what the interval rests on: one of the three texts above
};

// Takes the fields one by one and keeps none of them.
class FolderScatter {
 public:
  explicit FolderScatter(Measurement first) : first_(std::move(first)) { add(first_); }

  bool alike(const Measurement& m) const {
    return first_.name == m.name && first_.label == m.label && first_.unit == m.unit;
  }
  void add(const Measurement& field);
  FolderStatistics statistics() const;

 private:
  Measurement first_;
  Measurement last_;  // of those with a finite value
  std::int64_t left_out_ = 0;
  RunningMoments estimates_;
  RunningMoments variances_;
};

FolderStatistics folder_statistics(std::span<const Measurement> fields);

// How many more fields bring %RA down to the target (percent, > 0) if mean and s stay as they are;
// 0 if it is met. Empty if that cannot be said: fewer than 2 fields, mean 0, or more than
// kMostFields needed.
inline constexpr std::int64_t kMostFields = 1'000'000;
std::optional<std::int64_t> further_fields(const FolderStatistics& statistics,
                                           double target_relative_accuracy = 10);

}  // namespace stillfield

#endif  // STILLFIELD_MEASURE_FOLDER_STATISTICS_H_
