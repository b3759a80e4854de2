#include "model/noise_rician.h"

#include <cmath>

#include "core/elementary.h"

namespace stillfield {
namespace {

constexpr double kPi = 3.14159265358979323846;

// e^(-x) I_order(x), order 0 or 1, x >= 0 (Abramowitz & Stegun 9.6.10 and 9.7.1).
double scaled_bessel(int order, double x) {
  if (x < 25.0) {
    const double q = 0.25 * x * x;
    double term = order == 0 ? 1.0 : 0.5 * x;
    double sum = term;
    for (int k = 1; k < 200; ++k) {
      term *= q / (static_cast<double>(k) * (k + order));
      sum += term;
      if (term < 1e-17 * sum) break;
    }
    return sum * exact_exp(-x);
  }
  const double mu = 4.0 * order * order;
  double term = 1.0;
  double sum = 1.0;
  for (int k = 1; k < 25; ++k) {
    const double odd = 2.0 * k - 1.0;
    term *= -(mu - odd * odd) / (k * 8.0 * x);
    sum += term;
  }
  return sum / std::sqrt(2.0 * kPi * x);
}

}  // namespace

double rician_density(double y, double s) {
  return y * exact_exp(-0.5 * (y - s) * (y - s)) * scaled_bessel(0, s * y);
}

double rician_mean(double s) {
  const double q = 0.25 * s * s;
  return std::sqrt(kPi / 8.0) * ((2.0 + s * s) * scaled_bessel(0, q) + s * s * scaled_bessel(1, q));
}

double rician_variance(double s) {
  if (s > 30.0) {
    // 1 - 1/(2 s^2) - 1/(2 s^4) - ...: the difference of squares would cancel.
    const double t = 1.0 / (s * s);
    return 1.0 - t * (0.5 + t * (0.5 + t * 1.375));
  }
  const double mean = rician_mean(s);
  return s * s + 2.0 - mean * mean;
}

double rician_signal(double ratio) {
  const auto ratio_at = [](double s) { return rician_mean(s) / std::sqrt(rician_variance(s)); };
  if (!(ratio > ratio_at(0.0))) return 0.0;
  double low = 0.0;
  double high = ratio;  // E y / sd y >= s
  for (int i = 0; i < 60; ++i) {
    const double middle = 0.5 * (low + high);
    (ratio_at(middle) < ratio ? low : high) = middle;
  }
  return 0.5 * (low + high);
}

}  // namespace stillfield
