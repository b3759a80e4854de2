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

CorrectedValue correct_value(const BootstrapErrors& bootstrap) {
  CorrectedValue result;
  if (!std::isfinite(bootstrap.value) || bootstrap.errors.empty()) return result;
  std::vector<double> bias;
  double within = 0;
  std::size_t n = 0;
  for (const std::vector<double>& kind : bootstrap.errors) {
    const std::vector<double> errors = finite(kind);
    if (errors.size() < 2) return result;
    bias.push_back(mean_of(errors));
    within += variance_of(errors);
    n += errors.size();
  }
  const auto kinds = static_cast<double>(bias.size());
  const double b = mean_of(bias);
  double between = 0;
  for (const double g : bias) between += (g - b) * (g - b);
  const double v = (within + between) / kinds;
  const double p = std::isfinite(bootstrap.posterior_variance) ? bootstrap.posterior_variance : 0.0;
  const double u = std::sqrt((1.0 + 1.0 / static_cast<double>(n)) * v + p +
                             bootstrap.bias_share * b * b + bootstrap.floor_variance);
  const auto dof = static_cast<std::int64_t>(n - bias.size());
  const auto within_range = [&](double value) {
    return std::clamp(value, bootstrap.lowest, bootstrap.highest);
  };
  const double centre = bootstrap.value - b;
  const double half90 = student_t_quantile(0.95, dof) * u;
  const double half95 = student_t_quantile(0.975, dof) * u;
  result.estimate = within_range(centre);
  result.sd = u;
  result.lower90 = within_range(centre - half90);
  result.upper90 = within_range(centre + half90);
  result.lower95 = within_range(centre - half95);
  result.upper95 = within_range(centre + half95);
  return result;
}

}  // namespace stillfield
