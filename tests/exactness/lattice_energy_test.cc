// Fields without data against the statistical mechanics of the square lattice.
//
// Free     E[S] of L x L fields with the program's own free boundaries, by sweep_labels, against
//          transfer matrices (strip.h)
// Torus    energy per site of L = 4, 16, 32 with the program's kernels and periodic guards
//          (torus.h) against Kaufman 1949, recomputed from the formula (kaufman.h)
// Error    4 Monte Carlo standard errors, from at least 100 batches far longer than the
//          autocorrelation time (at the critical point about L^2.17 sweeps); false alarms 6.3e-5 a
//          comparison, seeds fixed
#include <catch2/catch.hpp>
#include <cmath>

#include "exactness/batch_means.h"
#include "exactness/kaufman.h"
#include "exactness/strip.h"
#include "exactness/test_field.h"
#include "exactness/torus.h"

using namespace stillfield;
using namespace stillfield::exactness;

namespace {

// Onsager 1944.
const double kCritical = 0.5 * std::log(1.0 + std::sqrt(2.0));

void check(const Estimate& e, double exact, double finest) {
  CAPTURE(e.mean, e.mcse, exact, e.deviations(exact));
  CHECK(e.deviations(exact) <= 4.0);
  CHECK(e.mcse < finest);
}

void check_free(int side, int classes, double beta) {
  CAPTURE(side, classes, beta);
  TestField field(empty_spec(side, side, classes, beta, 31));
  field.sweep(2000);
  BatchMeans pairs(1000);
  while (pairs.batches() < 200) {
    field.sweep(2);
    pairs.add(field.pairs_now());
  }
  const double all_pairs = 2.0 * side * (side - 1);
  check(pairs.estimate(), sum_strip(side, side, classes, beta).mean_pairs, 1e-3 * all_pairs);
}

void check_torus(int side, double b, int batch, int stride) {
  CAPTURE(side, b);
  Torus torus(side, 2, 2.0 * b, 32, true);
  torus.sweep(10 * batch);
  BatchMeans energy(batch);
  while (energy.batches() < 100) {
    torus.sweep(stride);
    // Pairs: +1 where spins are equal, -1 where not; two pairs a site.
    energy.add(-2.0 * (2.0 * torus.equal_fraction() - 1.0));
  }
  check(energy.estimate(), torus_energy(side, b), 3e-3);
}

}  // namespace

TEST_CASE("two labels on a free lattice have the exact mean number of equal pairs") {
  check_free(8, 2, 2.0 * 0.4);
  check_free(8, 2, 2.0 * kCritical);
  check_free(12, 2, 2.0 * 0.4);
  check_free(12, 2, 2.0 * kCritical);
}

TEST_CASE("three labels on a free lattice have the exact mean number of equal pairs") {
  check_free(6, 3, 0.8);
  check_free(6, 3, std::log(1.0 + std::sqrt(3.0)));
}

TEST_CASE("the torus of two labels has Kaufman's energy") {
  check_torus(4, 0.4, 4000, 1);
  check_torus(16, 0.4, 1000, 2);
  check_torus(16, kCritical, 2000, 2);
  check_torus(32, 0.4, 1000, 4);
}

TEST_CASE("the torus of 32 x 32 two labels has Kaufman's energy at the critical point") {
  check_torus(32, kCritical, 5000, 4);
}
