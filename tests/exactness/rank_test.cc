// Simulation-based calibration of `--coupling sampled`: the rank of the truth among draws from its
// posterior is uniform, for the coupling, class means, variances and the area fraction.
//
// Method   Parameters, labels and grey values are drawn jointly. The truth then is a draw from the
//          posterior given these grey values, and so is every state of a chain through it. The
//          truth is put at a random place of a chain of kDraws + 1 states: the later ones by the
//          program's sampler, the earlier ones by the sampler run backwards. Its rank then is
//          uniform exactly, whether or not the chain mixes (Besag & Clifford 1989; Gandy & Scott
//          2020; rank histograms: Talts et al. 2018).
// Reverse  A block is labels by colour 0, 1, 0, 1, then the parameters, whose steps are reversible
//          given the labels; backwards it is the parameters, then colour 1, 0, 1, 0. On the image
//          mirrored left to right, of even width, the colours have changed places: the reverse is
//          parameters and then the program's own sweep of the mirrored image.
// Ties     (fraction, and parameters that a rejected draw left as they were) are broken at random
// Error    seven chi-squared tests of 16 ranks, together a false-alarm level of 1 %
#include <algorithm>
#include <array>
#include <boost/math/distributions/chi_squared.hpp>
#include <catch2/catch.hpp>
#include <vector>

#include "exactness/joint_draw.h"
#include "random/stream.h"

using namespace stillfield;
using namespace stillfield::exactness;

namespace {

constexpr int kDraws = 15;
constexpr int kReplications = 3200;
constexpr int kBlocksBetween = 2;
constexpr std::array<const char*, 7> kNames{"coupling", "mean 1",   "mean 2",     "sd 1",
                                            "sd 2",     "fraction", "equal pairs"};
using Scalars = std::array<double, kNames.size()>;

Scalars scalars_of(TestField& field) {
  const LabelModel& m = field.chain.model;
  const double pairs = field.pairs_now();  // counts the classes, too
  const auto ones = static_cast<double>(field.chain.totals.classes[1].sites);
  return {
      m.prior.beta, m.classes.mean[0], m.classes.mean[1], m.classes.sd[0], m.classes.sd[1], ones,
      pairs};
}

template <class Pixels>
void mirror(Pixels& pixels) {
  for (int y = 0; y < kJointSide; ++y) {
    std::reverse(pixels.begin() + y * kJointSide, pixels.begin() + (y + 1) * kJointSide);
  }
}

// `count` states from the truth on, in time or against it.
std::vector<Scalars> states(const LogPartition& log_partition, JointDraw joint, bool backwards,
                            int count) {
  if (backwards) {
    mirror(joint.spec.level);
    mirror(joint.labels);
    joint.spec.seed += 1000000;
  }
  TestField field(joint.spec);
  field.set_labels(joint.labels);
  std::vector<Scalars> out;
  for (int i = 0; i < count; ++i) {
    for (int b = 0; b < kBlocksBetween; ++b) {
      if (backwards) draw_parameters(log_partition, field);
      sweep_block(field);
      if (!backwards) draw_parameters(log_partition, field);
    }
    out.push_back(scalars_of(field));
  }
  return out;
}

}  // namespace

TEST_CASE("the truth has a uniform rank among its posterior draws") {
  const LogPartition log_partition = exact_log_partition(make_neighbourhood(Connectivity::kFour));
  std::array<std::array<int, kDraws + 1>, kNames.size()> histogram{};
  int moved = 0;
  for (int r = 0; r < kReplications; ++r) {
    const auto seed = static_cast<std::uint64_t>(200000 + r);
    const JointDraw joint = draw_jointly(log_partition, seed);
    RandomStream random(chain_key(seed, 10), Purpose::kSimulation);
    const int earlier = static_cast<int>(random.uniform() * (kDraws + 1));
    std::vector<Scalars> draws = states(log_partition, joint, true, earlier);
    for (const Scalars& s : states(log_partition, joint, false, kDraws - earlier)) {
      draws.push_back(s);
    }
    TestField at_truth(joint.spec);
    at_truth.set_labels(joint.labels);
    const Scalars truth = scalars_of(at_truth);
    for (std::size_t q = 0; q < kNames.size(); ++q) {
      int below = 0, equal = 0;
      for (const Scalars& s : draws) {
        below += s[q] < truth[q] ? 1 : 0;
        equal += s[q] == truth[q] ? 1 : 0;
      }
      const int rank = below + static_cast<int>(random.uniform() * (equal + 1));
      ++histogram[q][static_cast<std::size_t>(rank)];
      if (q == 0) moved += equal == 0 ? 1 : 0;
    }
  }
  CHECK(moved > kReplications * 0.99);  // the coupling is drawn anew every block
  const boost::math::chi_squared law(kDraws);
  const double limit = boost::math::quantile(boost::math::complement(law, 0.01 / kNames.size()));
  for (std::size_t q = 0; q < kNames.size(); ++q) {
    constexpr double kExpected = kReplications / (kDraws + 1.0);
    double distance = 0;
    for (const int n : histogram[q]) distance += (n - kExpected) * (n - kExpected) / kExpected;
    INFO(kNames[q] << ": chi-squared " << distance << " with 15 degrees of freedom");
    CHECK(distance < limit);
  }
}
