// Random traces for the tests: std::mt19937_64 (fixed by the standard) and Box-Muller, because the
// distributions of <random> differ between standard libraries.
#ifndef STILLFIELD_TESTS_DIAGNOSE_TEST_RANDOM_H_
#define STILLFIELD_TESTS_DIAGNOSE_TEST_RANDOM_H_

#include <cmath>
#include <cstdint>
#include <random>

#include "diagnose/draws.h"

namespace stillfield::testing {

inline constexpr double kPi = 3.141592653589793;

class TestRandom {
 public:
  explicit TestRandom(std::uint64_t seed) : engine_(seed) {}

  // In (0, 1).
  double uniform() { return (static_cast<double>(engine_() >> 11) + 0.5) * 0x1p-53; }
  double normal() {
    return std::sqrt(-2.0 * std::log(uniform())) * std::cos(2.0 * kPi * uniform());
  }
  double cauchy() { return std::tan(kPi * (uniform() - 0.5)); }

 private:
  std::mt19937_64 engine_;
};

inline Draws normal_draws(TestRandom& random, std::size_t n, std::size_t m) {
  Draws draws(n, m);
  for (double& x : draws.values()) x = random.normal();
  return draws;
}

// Stationary AR(1) chains: x_t = rho x_{t-1} + e_t.
inline Draws autoregressive_draws(TestRandom& random, std::size_t n, std::size_t m, double rho) {
  Draws draws(n, m);
  for (std::size_t c = 0; c < m; ++c) {
    double x = random.normal() / std::sqrt(1.0 - rho * rho);
    for (double& out : draws.chain(c)) {
      out = x;
      x = rho * x + random.normal();
    }
  }
  return draws;
}

}  // namespace stillfield::testing

#endif  // STILLFIELD_TESTS_DIAGNOSE_TEST_RANDOM_H_
