#include "core/elementary.h"

#include <bit>
#include <cmath>
#include <cstdint>
#include <limits>

namespace stillfield {
namespace {

// ln 2 as a sum of two doubles; the first has 33 significant bits, so n * kLn2Hi is exact for
// |n| < 2^20.
constexpr double kLn2Hi = 6.93147180369123816490e-01;
constexpr double kLn2Lo = 1.90821492927058770002e-10;
constexpr double kLog2E = 1.44269504088896338700e+00;

// 2^n by its bit pattern, -1022 <= n <= 1023.
double power_of_two(int n) {
  return std::bit_cast<double>(static_cast<std::uint64_t>(n + 1023) << 52);
}

}  // namespace

double exact_exp(double x) {
  if (!(x == x)) return x;
  if (x > 709.782712893384) return std::numeric_limits<double>::infinity();
  if (x < -745.2) return 0.0;
  // x = n ln2 + r, |r| <= ln2 / 2; e^r by its Taylor series (degree 13: remainder < 5e-18).
  const double n = std::floor(x * kLog2E + 0.5);
  const double hi = x - n * kLn2Hi;
  const double lo = n * kLn2Lo;
  const double r = hi - lo;
  double p = 1.0 / 6227020800.0;
  p = p * r + 1.0 / 479001600.0;
  p = p * r + 1.0 / 39916800.0;
  p = p * r + 1.0 / 3628800.0;
  p = p * r + 1.0 / 362880.0;
  p = p * r + 1.0 / 40320.0;
  p = p * r + 1.0 / 5040.0;
  p = p * r + 1.0 / 720.0;
  p = p * r + 1.0 / 120.0;
  p = p * r + 1.0 / 24.0;
  p = p * r + 1.0 / 6.0;
  p = p * r + 0.5;
  // e^r = 1 + r + r^2 p, with the rounding error of r = hi - lo carried into the sum.
  const double tail = (hi - r) - lo;
  const double e = 1.0 + (r + (r * r * p + tail));
  int k = static_cast<int>(n);
  if (k > 1023) return e * power_of_two(1023) * power_of_two(k - 1023);
  if (k < -1022) return e * power_of_two(k + 600) * power_of_two(-600);
  return e * power_of_two(k);
}

double exact_log(double x) {
  if (!(x == x) || x < 0.0) return std::numeric_limits<double>::quiet_NaN();
  if (x == 0.0) return -std::numeric_limits<double>::infinity();
  if (x == std::numeric_limits<double>::infinity()) return x;
  int extra = 0;
  if (x < std::numeric_limits<double>::min()) {  // subnormal: scale up by 2^54, exactly
    x *= 18014398509481984.0;
    extra = -54;
  }
  // x = 2^k m with m in [sqrt(1/2), sqrt 2)
  const auto bits = std::bit_cast<std::uint64_t>(x);
  int k = static_cast<int>(bits >> 52) - 1023;
  double m = std::bit_cast<double>((bits & 0x000fffffffffffffULL) | 0x3ff0000000000000ULL);
  if (m > 1.4142135623730951) {
    m *= 0.5;
    ++k;
  }
  k += extra;
  // log m = log((1+s)/(1-s)) = 2 (s + s^3/3 + s^5/5 + ...), s = f / (2 + f), |s| < 0.1716;
  // written as f - (f^2/2 - s (f^2/2 + R)) so that the leading term is exact.
  const double f = m - 1.0;
  const double s = f / (2.0 + f);
  const double z = s * s;
  double r = 2.0 / 23.0;
  r = r * z + 2.0 / 21.0;
  r = r * z + 2.0 / 19.0;
  r = r * z + 2.0 / 17.0;
  r = r * z + 2.0 / 15.0;
  r = r * z + 2.0 / 13.0;
  r = r * z + 2.0 / 11.0;
  r = r * z + 2.0 / 9.0;
  r = r * z + 2.0 / 7.0;
  r = r * z + 2.0 / 5.0;
  r = r * z + 2.0 / 3.0;
  r = r * z;
  const double half = 0.5 * f * f;
  const double n = k;
  return n * kLn2Hi - ((half - (s * (half + r) + n * kLn2Lo)) - f);
}

}  // namespace stillfield
