#include "measure/student_t.h"

#include <cmath>
#include <limits>

#include "diagnose/inverse_normal.h"

namespace stillfield {
namespace {

constexpr double kPi = 3.141592653589793;
constexpr std::int64_t kLargestSummed = 200;

// Arc tangent of x >= 0: the angle halved three times, then its Taylor series (|x| < 0.2, the
// terms left out add up to less than 1e-17).
double arc_tangent(double x) {
  for (int i = 0; i < 3; ++i) x = x / (1 + std::sqrt(1 + x * x));
  double sum = 0;
  for (int k = 25; k > 0; k -= 2) sum = 1.0 / k - x * x * sum;
  return 8 * x * sum;
}

// P(|T| <= t), t >= 0.
double central_probability(double t, std::int64_t dof) {
  const double v = static_cast<double>(dof);
  const double cos2 = v / (v + t * t);
  const double sine = t / std::sqrt(v + t * t);
  const bool odd = dof % 2 == 1;
  double term = odd ? std::sqrt(cos2) : 1.0;
  double sum = 0;
  for (std::int64_t k = odd ? 1 : 0; k <= dof - 2; k += 2) {
    sum += term;
    term *= cos2 * static_cast<double>(k + 1) / static_cast<double>(k + 2);
  }
  if (!odd) return sine * sum;
  return 2 / kPi * (arc_tangent(t / std::sqrt(v)) + sine * sum);
}

double solved_quantile(double p, std::int64_t dof) {
  const double target = 2 * p - 1;
  double low = 0;
  double high = 2;
  while (central_probability(high, dof) < target && high < 1e300) high *= 2;
  while (true) {
    const double middle = low + 0.5 * (high - low);
    if (!(low < middle && middle < high)) return middle;
    (central_probability(middle, dof) < target ? low : high) = middle;
  }
}

double expanded_quantile(double p, std::int64_t dof) {
  const double v = static_cast<double>(dof);
  const double z = inverse_normal(p);
  const double z2 = z * z;
  const double g1 = (z2 + 1) * z / 4;
  const double g2 = ((5 * z2 + 16) * z2 + 3) * z / 96;
  const double g3 = (((3 * z2 + 19) * z2 + 17) * z2 - 15) * z / 384;
  const double g4 = ((((79 * z2 + 776) * z2 + 1482) * z2 - 1920) * z2 - 945) * z / 92160;
  return z + (g1 + (g2 + (g3 + g4 / v) / v) / v) / v;
}

}  // namespace

double student_t_quantile(double p, std::int64_t dof) {
  if (!(p > 0 && p < 1) || dof < 1) return std::numeric_limits<double>::quiet_NaN();
  if (p < 0.5) return -student_t_quantile(1 - p, dof);
  if (p == 0.5) return 0;
  return dof <= kLargestSummed ? solved_quantile(p, dof) : expanded_quantile(p, dof);
}

}  // namespace stillfield
