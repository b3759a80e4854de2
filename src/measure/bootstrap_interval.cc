#include "measure/bootstrap_interval.h"

#include <algorithm>
#include <cmath>

#include "diagnose/moments.h"
#include "measure/student_t.h"

namespace stillfield {
namespace {

std::vector<double> finite(const std::vector<double>& values) {
  std::vector<double> kept;
  for (const double v : values) {
    if (std::isfinite(v)) kept.push_back(v);
  }
  return kept;
}

}  // namespace

BootstrapParts bootstrap_parts(const BootstrapErrors& bootstrap) {
  BootstrapParts parts;
  if (!std::isfinite(bootstrap.value)) return parts;
  for (const std::vector<double>& kind : bootstrap.errors) {
    const std::vector<double> errors = finite(kind);
    if (errors.size() < 2) return {};
    parts.bias.push_back(mean_of(errors));
    parts.within.push_back(variance_of(errors));
    parts.number += static_cast<double>(errors.size());
  }
  return parts;
}

bool correct_measurement(const BootstrapErrors& bootstrap, const BootstrapShares& shares,
                         Measurement& m) {
  const BootstrapParts parts = bootstrap_parts(bootstrap);
  if (parts.bias.empty()) return false;
  const double b = mean_of(parts.bias);
  double between = 0;
  for (const double g : parts.bias) between += (g - b) * (g - b);
  between /= static_cast<double>(parts.bias.size());
  const double p = std::isfinite(bootstrap.posterior_variance) ? bootstrap.posterior_variance : 0.0;
  const double u = std::sqrt(shares.within * (1.0 + 1.0 / parts.number) * mean_of(parts.within) +
                             shares.between * between + shares.bias * b * b + shares.posterior * p +
                             shares.floor * bootstrap.floor_variance);
  const auto dof =
      static_cast<std::int64_t>(parts.number) - static_cast<std::int64_t>(parts.bias.size());
  const auto within_range = [&](double value) {
    return std::clamp(value, bootstrap.lowest, bootstrap.highest);
  };
  const double centre = bootstrap.value - shares.correction * b;
  const double half90 = student_t_quantile(0.95, dof) * u;
  const double half95 = student_t_quantile(0.975, dof) * u;
  m.estimate = within_range(centre);
  m.sd = u;
  m.lower90 = within_range(centre - half90);
  m.upper90 = within_range(centre + half90);
  m.lower95 = within_range(centre - half95);
  m.upper95 = within_range(centre + half95);
  return true;
}

}  // namespace stillfield
