// The exact references against each other: different ways to the same numbers.
#include <catch2/catch.hpp>
#include <cmath>

#include "exactness/kaufman.h"
#include "exactness/row_states.h"
#include "exactness/strip.h"
#include "exactness/test_field.h"

using namespace stillfield;
using namespace stillfield::exactness;

TEST_CASE("row states give the sums over all states") {
  struct Case {
    int width, height, classes;
  };
  for (const Connectivity connectivity : {Connectivity::kFour, Connectivity::kEight}) {
    for (const Case& c : {Case{3, 3, 2}, {3, 3, 3}, {4, 4, 2}, {4, 3, 3}, {1, 5, 3}, {5, 1, 2}}) {
      CAPTURE(c.width, c.height, c.classes, static_cast<int>(connectivity));
      const GibbsField f =
          plain_field(random_spec(c.width, c.height, connectivity, c.classes, 0.7, 3));
      const ExactSums all = sum_all_states(f);
      const ExactSums rows = sum_row_states(f);
      CHECK(rows.log_z == Approx(all.log_z).epsilon(1e-12));
      CHECK(rows.mean_pairs == Approx(all.mean_pairs).epsilon(1e-12));
      for (std::size_t i = 0; i < all.marginal.size(); ++i) {
        CHECK(rows.marginal[i] == Approx(all.marginal[i]).epsilon(1e-10));
      }
    }
  }
}

TEST_CASE("pixel-by-pixel strips give the sums over row states") {
  for (const int classes : {2, 3}) {
    for (const double beta : {0.0, 0.5, 1.1}) {
      CAPTURE(classes, beta);
      const ExactSums rows = sum_row_states(plain_field(empty_spec(4, 5, classes, beta, 1)));
      const StripSums strip = sum_strip(4, 5, classes, beta);
      CHECK(strip.log_z == Approx(rows.log_z).epsilon(1e-12));
      CHECK(strip.mean_pairs == Approx(rows.mean_pairs).epsilon(1e-12));
    }
  }
}

TEST_CASE("Kaufman's torus agrees with the sum over all states of 4 x 4") {
  constexpr int kSide = 4;
  for (const double b : {0.4, 0.5 * std::log(1.0 + std::sqrt(2.0))}) {
    double z = 0.0, energy = 0.0;
    for_each_state(kSide * kSide, 2, [&](const Labels& labels) {
      const auto spin = [&](int x, int y) {
        return 2 * labels[static_cast<std::size_t>(y % kSide * kSide + x % kSide)] - 1;
      };
      int sum = 0;
      for (int y = 0; y < kSide; ++y) {
        for (int x = 0; x < kSide; ++x) sum += spin(x, y) * (spin(x + 1, y) + spin(x, y + 1));
      }
      const double p = std::exp(b * sum);
      z += p;
      energy -= p * sum;
    });
    CHECK(static_cast<double>(torus_log_z(kSide, b)) == Approx(std::log(z)).epsilon(1e-12));
    CHECK(torus_energy(kSide, b) == Approx(energy / z / (kSide * kSide)).epsilon(1e-9));
  }
}

TEST_CASE("large tori approach Onsager's infinite lattice") {
  // u at the critical point is -sqrt 2 (Onsager 1944); Kaufman's finite lattices come down to it
  // as 1 / L (Ferdinand & Fisher 1969).
  const double critical = 0.5 * std::log(1.0 + std::sqrt(2.0));
  const double u64 = torus_energy(64, critical) + std::sqrt(2.0);
  const double u128 = torus_energy(128, critical) + std::sqrt(2.0);
  CHECK(u64 / u128 == Approx(2.0).epsilon(1e-3));
  CHECK(2 * u128 - u64 == Approx(0.0).margin(2e-6));
}
