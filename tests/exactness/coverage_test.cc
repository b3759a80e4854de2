// Intervals of `--coupling sampled` on images drawn from the model itself.
//
// Images   40 two-label Potts fields of 40 x 40, beta = 0.85, Gaussian noise of 0.6 class contrasts
//          (tests/study/synthetic.h); restore_one as the program runs it, with 3 000 sweeps at most
// Bound    the number of 90 % intervals of the area fraction that hold the truth is
//          binomial(40, 0.9) if the intervals are right; too few at a false-alarm level of 1e-3.
//          Since 40 of 40 has probability 1.5 %, intervals that are too wide show in the ranks
//          instead: the truth's place in its posterior has mean 1/2 and variance 1/12.
//          The images are drawn at one beta, not from a prior, so this holds nearly, not exactly;
//          calibration_test.cc has the exact test.
#include <algorithm>
#include <boost/math/distributions/binomial.hpp>
#include <catch2/catch.hpp>
#include <cmath>

#include "job/restore_one.h"
#include "study/synthetic.h"

using namespace stillfield;

namespace {

constexpr int kImages = 40;
constexpr int kSide = 40;

}  // namespace

TEST_CASE("intervals of the area fraction cover the truth of Potts images") {
  const Pool pool(1);
  JobObserver observer;
  int covered = 0, converged = 0;
  double rank_sum = 0.0, rank_squares = 0.0;
  for (int i = 0; i < kImages; ++i) {
    const auto seed = static_cast<std::uint64_t>(300 + i);
    const study::TruthField truth = study::draw_potts(kSide, 2, 0.85, 4000, seed);
    const GreyLevels grey = make_grey_levels(study::add_noise(truth, 0.6, seed).view());
    SegmentSettings settings;
    settings.coupling.mode = CouplingMode::kSampled;
    settings.schedule.max_sweeps = 3000;
    settings.schedule.sweeps_a_block = 8;
    const LabelSampling run = restore_one(grey, settings, seed, pool, observer);
    const auto& traces = run.traces->all();
    REQUIRE(traces[1].name == "area_fraction");
    REQUIRE(traces[1].label == 2);
    const TraceSummary& fraction = run.scalars[1].summary;
    covered += fraction.lower90 <= truth.fraction && truth.fraction <= fraction.upper90;
    converged += run.verdict.converged;
    double below = 0.0, draws = 0.0;
    for (const auto& chain : traces[1].chains) {
      for (const double f : chain) {
        below += f < truth.fraction ? 1.0 : f == truth.fraction ? 0.5 : 0.0;
        draws += 1.0;
      }
    }
    const double rank = below / draws - 0.5;
    rank_sum += rank;
    rank_squares += rank * rank;
  }
  CAPTURE(covered, converged, rank_sum / kImages, rank_squares / kImages);
  const boost::math::binomial_distribution<> coverage(kImages, 0.9);
  CHECK(boost::math::cdf(coverage, covered) > 1e-3);
  // 4 standard errors of the mean and the mean square of uniforms on (-1/2, 1/2).
  CHECK(std::fabs(rank_sum / kImages) < 4.0 * std::sqrt(1.0 / 12.0 / kImages));
  CHECK(std::fabs(rank_squares / kImages - 1.0 / 12.0) < 4.0 * std::sqrt(1.0 / 180.0 / kImages));
}
