// The exponentials of many doubles are the bytes of exact_exp, which tests/core checks against
// libm.
#include "simd/exponentials.h"

#include <catch2/catch.hpp>
#include <cstring>
#include <vector>

#include "core/elementary.h"
#include "random/stream.h"
#include "simd/forced_target.h"

using namespace stillfield;
using namespace stillfield::testing;

TEST_CASE("exponentials of many doubles are those of one, on every CPU target") {
  RandomStream random({3, 14}, Purpose::kSimulation);
  std::vector<double> x{0.0, -0.0, 1.0, -1.0, 700.0, -700.0, 1e-300, -1e-18, 0.34657359027997264};
  for (int i = 0; i < 20000; ++i) x.push_back((2 * random.uniform() - 1) * (i % 2 == 0 ? 700 : 3));
  std::vector<double> expected;
  for (const double v : x) expected.push_back(exact_exp(v));
  x.resize((x.size() + kExponentialsBatch - 1) / kExponentialsBatch * kExponentialsBatch);
  for_each_target([&](const std::string& name) {
    CAPTURE(name);
    std::vector<double> values = x;
    exponentials(values.data(), static_cast<std::ptrdiff_t>(expected.size()));
    CHECK(std::memcmp(values.data(), expected.data(), expected.size() * sizeof(double)) == 0);
  });
}

TEST_CASE("arguments of exponentials are clamped to their range") {
  std::vector<double> values(kExponentialsBatch, -1e9);
  values[1] = 1e9;
  exponentials(values.data(), 2);
  CHECK(values[0] == exact_exp(-kLargestExponent));
  CHECK(values[1] == exact_exp(kLargestExponent));
}
