// A sequence of random numbers for scalar draws: parameters, starts, simulated data.
//
// A stream is named by (key, purpose, sweep, lane); the same name gives the same sequence
// wherever and whenever it is read. Standard-library distributions are not used: they differ
// between libraries.
#ifndef STILLFIELD_RANDOM_STREAM_H_
#define STILLFIELD_RANDOM_STREAM_H_

#include <cstdint>

#include "random/counters.h"

namespace stillfield {

// Uniform on the open interval (0, 1): (n + 1/2) / 2^52 with n the upper 52 bits. A 53rd bit would
// round the largest value up to 1.
constexpr double open_uniform(std::uint64_t bits) {
  return (static_cast<double>(bits >> 12) + 0.5) * 0x1p-52;
}

class RandomStream {
 public:
  RandomStream(PhiloxKey key, Purpose purpose, std::uint32_t sweep = 0, std::uint32_t lane = 0);

  std::uint32_t word();

  // Uniform on the open interval (0, 1), 52 bits.
  double uniform();

  // Standard normal, by the polar method (Marsaglia & Bray 1964).
  double normal();

  // Gamma with the given shape > 0 and scale 1 (Marsaglia & Tsang 2000; shapes below one by
  // Gamma(a) = Gamma(a + 1) U^(1/a)).
  double gamma(double shape);

  // Poisson with the given mean >= 0: counts exponential gaps below 30; larger means are split at
  // a Gamma-distributed arrival (Ahrens & Dieter 1974).
  std::int64_t poisson(double mean);

 private:
  PhiloxKey key_;
  PhiloxCounter counter_;
  PhiloxCounter block_{};
  int used_ = 4;
};

}  // namespace stillfield

#endif  // STILLFIELD_RANDOM_STREAM_H_
