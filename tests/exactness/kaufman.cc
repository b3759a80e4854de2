#include "exactness/kaufman.h"

#include <cmath>
#include <numbers>

namespace stillfield::exactness {

long double torus_log_z(int side, long double b) {
  const long double n = side;
  const auto gamma = [&](int l) {
    if (l == 0) return 2 * b + std::log(std::tanh(b));
    return std::acosh(std::cosh(2 * b) / std::tanh(2 * b) -
                      std::cos(std::numbers::pi_v<long double> * l / n));
  };
  // Logarithms of the four products; the last one has the sign of g_0.
  long double odd_cosh = 0, odd_sinh = 0, even_cosh = 0, even_sinh = 0;
  for (int r = 0; r < side; ++r) {
    const auto add = [n](long double g, long double& log_cosh, long double& log_sinh) {
      const long double x = n * std::fabs(g) / 2;
      log_cosh += x + std::log1p(std::exp(-2 * x));
      log_sinh += x + std::log1p(-std::exp(-2 * x));
    };
    add(gamma(2 * r + 1), odd_cosh, odd_sinh);
    add(gamma(2 * r), even_cosh, even_sinh);
  }
  const long double sign = gamma(0) < 0 ? -1 : 1;
  const long double sum = 1 + std::exp(odd_sinh - odd_cosh) + std::exp(even_cosh - odd_cosh) +
                          sign * std::exp(even_sinh - odd_cosh);
  return n * n / 2 * std::log(2 * std::sinh(2 * b)) - std::log(2.0L) + odd_cosh + std::log(sum);
}

double torus_energy(int side, double b) {
  const auto slope = [&](long double h) {
    return (torus_log_z(side, b + h) - torus_log_z(side, b - h)) / (2 * h);
  };
  const long double derivative = (4 * slope(0.5e-3L) - slope(1e-3L)) / 3;
  return static_cast<double>(-derivative / (static_cast<long double>(side) * side));
}

}  // namespace stillfield::exactness
