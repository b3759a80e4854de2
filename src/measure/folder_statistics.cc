#include "measure/folder_statistics.h"

#include <cmath>

#include "core/error.h"
#include "measure/student_t.h"

namespace stillfield {
namespace {

std::string described(const Measurement& m) {
  const std::string where = m.label == 0 ? "" : " of class " + std::to_string(m.label);
  return m.name + where + " in " + m.unit;
}

void check_alike(const Measurement& a, const Measurement& b) {
  if (a.name == b.name && a.label == b.label && a.unit == b.unit) return;
  throw Error(ErrorKind::kUsage, "Fields measured as " + described(a) + " and as " + described(b) +
                                     " cannot be averaged; analyse all images of the folder with "
                                     "the same classes and either all or none with a pixel size.");
}

double half_width(double s, std::int64_t n) {
  return student_t_quantile(0.975, n - 1) * s / std::sqrt(static_cast<double>(n));
}

}  // namespace

void FolderScatter::add(const Measurement& field) {
  check_alike(first_, field);
  if (!std::isfinite(field.estimate) || !std::isfinite(field.sd)) {
    ++left_out_;
    return;
  }
  estimates_.add(field.estimate);
  variances_.add(field.sd * field.sd);
  last_ = field;
}

FolderStatistics FolderScatter::statistics() const {
  FolderStatistics out;
  out.name = first_.name;
  out.label = first_.label;
  out.unit = first_.unit;
  out.left_out = left_out_;
  out.fields = estimates_.count();
  if (out.fields == 0) return out;

  out.mean = estimates_.mean();
  out.within_field_sd = std::sqrt(variances_.mean());
  if (out.fields == 1) {
    out.basis = kOneField;
    out.standard_uncertainty = last_.sd;
    out.lower95 = last_.lower95;
    out.upper95 = last_.upper95;
    out.ci95 = 0.5 * (out.upper95 - out.lower95);
  } else {
    out.basis = kBetweenFields;
    out.s = std::sqrt(estimates_.variance());
    out.standard_uncertainty = out.s / std::sqrt(static_cast<double>(out.fields));
    out.ci95 = half_width(out.s, out.fields);
    out.lower95 = out.mean - out.ci95;
    out.upper95 = out.mean + out.ci95;
  }
  if (out.mean != 0) out.relative_accuracy = 100 * out.ci95 / std::fabs(out.mean);
  return out;
}

FolderStatistics folder_statistics(std::span<const Measurement> fields) {
  if (fields.empty()) return {};
  FolderScatter scatter(fields.front());
  for (const Measurement& field : fields.subspan(1)) scatter.add(field);
  return scatter.statistics();
}

std::optional<std::int64_t> further_fields(const FolderStatistics& statistics,
                                           double target_relative_accuracy) {
  if (!(target_relative_accuracy > 0)) {
    throw Error(ErrorKind::kUsage, "The relative accuracy to reach must be above 0 percent.");
  }
  if (statistics.fields < 2 || statistics.mean == 0) return std::nullopt;
  const double allowed = target_relative_accuracy / 100 * std::fabs(statistics.mean);
  const auto enough = [&](std::int64_t n) { return half_width(statistics.s, n) <= allowed; };
  if (enough(statistics.fields)) return 0;
  if (!enough(kMostFields)) return std::nullopt;
  // The half-width falls with n: bisection.
  std::int64_t too_few = statistics.fields;
  std::int64_t plenty = kMostFields;
  while (plenty - too_few > 1) {
    const std::int64_t middle = too_few + (plenty - too_few) / 2;
    (enough(middle) ? plenty : too_few) = middle;
  }
  return plenty - statistics.fields;
}

}  // namespace stillfield
