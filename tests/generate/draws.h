// Random numbers of the demo pictures.
//
// Independent of src/random on purpose: the pictures must stay the same bytes when the program's
// own numbers change. A counter through the SplitMix64 finaliser (Steele, Lea & Flood 2014);
// normals by Marsaglia's polar method (1964), Poisson counts by multiplication of uniforms
// (Knuth, The Art of Computer Programming, vol. 2, 3.4.1). No libm but sqrt, which IEEE 754 fixes.
#ifndef STILLFIELD_TESTS_GENERATE_DRAWS_H_
#define STILLFIELD_TESTS_GENERATE_DRAWS_H_

#include <cmath>
#include <cstdint>

#include "core/elementary.h"

namespace stillfield::generate {

// The finaliser alone: 64 well-mixed bits from any 64.
inline std::uint64_t mixed(std::uint64_t x) {
  x = (x ^ (x >> 30)) * 0xbf58476d1ce4e5b9u;
  x = (x ^ (x >> 27)) * 0x94d049bb133111ebu;
  return x ^ (x >> 31);
}

class Draws {
 public:
  // Streams of different (seed, picture) are unrelated.
  Draws(std::uint64_t seed, std::uint64_t picture) : state_(mixed(mixed(seed) + picture)) {}

  std::uint64_t bits() { return mixed(state_ += 0x9e3779b97f4a7c15u); }
  // In [0, 1).
  double uniform() { return static_cast<double>(bits() >> 11) * 0x1p-53; }
  double uniform(double low, double high) { return low + (high - low) * uniform(); }
  // In 0..n-1.
  int below(int n) { return static_cast<int>(uniform() * n); }

  double normal() {
    double u = 0, s = 0;
    do {
      u = uniform(-1, 1);
      const double v = uniform(-1, 1);
      s = u * u + v * v;
    } while (s >= 1 || s == 0);
    return u * std::sqrt(-2 * exact_log(s) / s);
  }

  // mean >= 0, at most about 700.
  int poisson(double mean) {
    const double floor = exact_exp(-mean);
    int count = 0;
    for (double product = uniform(); product > floor; product *= uniform()) ++count;
    return count;
  }

 private:
  std::uint64_t state_;
};

}  // namespace stillfield::generate

#endif  // STILLFIELD_TESTS_GENERATE_DRAWS_H_
