// Thread counts change nothing, and neither does the CPU target together with them.
#include <catch2/catch.hpp>
#include <vector>

#include "simd/label_problem.h"

using namespace stillfield;
using namespace stillfield::testing;

TEST_CASE("sweeps, counts and totals are the same bytes for 1, 2 and 4 threads") {
  // Large enough for several tasks a colour; 26 neighbours also spread slices over tasks.
  std::vector<LabelProblem> problems;
  for (const int classes : {2, 3, 9}) {
    problems.push_back({{700, 521, 1}, Connectivity::kFour, classes});
    problems.push_back({{1500, 403, 1}, Connectivity::kEight, classes});
    problems.push_back({{250, 93, 13}, Connectivity::kSix, classes, 0.3});
    problems.push_back({{250, 93, 13}, Connectivity::kTwentySix, classes, 0.1, 2.0});
  }
  for (const LabelProblem& p : problems) {
    CAPTURE(p.classes, p.extent.width, p.extent.height, static_cast<int>(p.connectivity));
    std::vector<std::uint8_t> labels;
    std::vector<std::vector<int>> visits;
    std::vector<std::uint64_t> pairs, sums;
    for (const int threads : {1, 2, 4}) {
      CAPTURE(threads);
      const Pool pool(threads);
      Subject subject(p);
      prepare_weights(subject.field, subject.chain.model, pool, subject.weights);
      subject.start_counting();
      subject.sweep(3, pool);
      total_labels(subject.field, pool, subject.chain);
      std::vector<std::uint64_t> these;
      for (const ClassSums& s : subject.chain.totals.classes) {
        these.insert(these.end(), {s.sites, s.observed, s.level_sum, s.level_square_sum});
      }
      if (threads == 1) {
        labels = subject.labels();
        visits = subject.visits();
        pairs = subject.chain.totals.equal_pairs;
        sums = these;
        continue;
      }
      CHECK((subject.labels() == labels));
      CHECK((subject.visits() == visits));
      CHECK(subject.chain.totals.equal_pairs == pairs);
      CHECK(these == sums);
    }
  }
}
