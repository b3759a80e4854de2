// Every marginal probability of small fields with data against exact values.
//
// Source   exact sums over all states, by row states (checked in references_test.cc)
// Error    4 Monte Carlo standard errors from 2 000 batch means of 200 sweeps. A correct sampler
//          fails one comparison of this file by chance with probability 6.3e-5, any of the about
//          400 with probability 2.5 %; seeds are fixed, so a run either always passes or never.
#include <algorithm>
#include <catch2/catch.hpp>

#include "exactness/batch_means.h"
#include "exactness/row_states.h"
#include "exactness/test_field.h"

using namespace stillfield;
using namespace stillfield::exactness;

namespace {

constexpr int kBatch = 200;  // visits are counted in bytes
constexpr int kBatches = 2000;

void check_field(const FieldSpec& spec) {
  const GibbsField plain = plain_field(spec);
  const ExactSums exact = sum_row_states(plain);
  const int classes = plain.classes;
  TestField field(spec);
  field.sweep(500);
  field.start_counting();
  std::vector<BatchMeans> share(plain.log_weight.size(), BatchMeans(kBatch));
  BatchMeans pairs(kBatch);
  for (int b = 0; b < kBatches; ++b) {
    for (int s = 0; s < kBatch; ++s) {
      field.sweep();
      pairs.add(field.pairs_now());
    }
    std::vector<int> first(static_cast<std::size_t>(plain.pixels()), kBatch);
    for (int k = 1; k < classes; ++k) {
      const std::vector<int> visits = field.visits(k);
      for (std::size_t s = 0; s < visits.size(); ++s) {
        share[s * static_cast<std::size_t>(classes) + static_cast<std::size_t>(k)].add_batch(
            static_cast<double>(visits[s]) / kBatch);
        first[s] -= visits[s];
      }
    }
    for (std::size_t s = 0; s < first.size(); ++s) {
      share[s * static_cast<std::size_t>(classes)].add_batch(static_cast<double>(first[s]) /
                                                             kBatch);
    }
    field.empty_visits();
  }
  // A comparison that could not fail would be none.
  REQUIRE(*std::min_element(exact.marginal.begin(), exact.marginal.end()) > 0.002);
  double worst = 0.0, coarsest = 0.0;
  for (std::size_t i = 0; i < share.size(); ++i) {
    const Estimate e = share[i].estimate();
    CAPTURE(i / static_cast<std::size_t>(classes), i % static_cast<std::size_t>(classes), e.mean,
            e.mcse, exact.marginal[i]);
    CHECK(e.deviations(exact.marginal[i]) <= 4.0);
    worst = std::max(worst, e.deviations(exact.marginal[i]));
    coarsest = std::max(coarsest, e.mcse);
  }
  const Estimate s = pairs.estimate();
  CAPTURE(s.mean, s.mcse, exact.mean_pairs, worst);
  CHECK(s.deviations(exact.mean_pairs) <= 4.0);
  CHECK(coarsest < 0.004);
}

}  // namespace

TEST_CASE("marginals of 3 x 3 and 4 x 4 fields with data are exact") {
  for (const int side : {3, 4}) {
    for (const int classes : {2, 3}) {
      for (const Connectivity connectivity : {Connectivity::kFour, Connectivity::kEight}) {
        CAPTURE(side, classes, static_cast<int>(connectivity));
        const double beta = connectivity == Connectivity::kFour ? 0.8 : 0.45;
        const auto seed = static_cast<std::uint64_t>(10 * side + classes);
        check_field(random_spec(side, side, connectivity, classes, beta, seed));
      }
    }
  }
}

TEST_CASE("marginals of thin and of four-class fields are exact") {
  check_field(random_spec(1, 6, Connectivity::kFour, 2, 0.9, 5));
  check_field(random_spec(6, 1, Connectivity::kEight, 3, 0.9, 6));
  check_field(random_spec(3, 4, Connectivity::kFour, 4, 0.7, 7));
  check_field(random_spec(2, 3, Connectivity::kEight, 9, 0.5, 8));
}
