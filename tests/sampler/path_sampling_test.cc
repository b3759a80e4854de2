// Path sampling of ln Z, and draws of the coupling, against transfer matrices and numerical
// integration.
#include "sampler/path_sampling.h"

#include <algorithm>
#include <catch2/catch.hpp>
#include <cmath>

#include "exactness/strip.h"

using namespace stillfield;
using exactness::sum_strip;

namespace {

// What the program integrates, with exact values in place of sampled ones.
LogPartition exact_partition(int side, int classes, double last) {
  constexpr int kPoints = 300;
  LogPartition lp;
  for (int i = 0; i <= kPoints; ++i) {
    const double beta = last * i / kPoints;
    const auto sums = sum_strip(side, side, classes, beta);
    lp.beta.push_back(beta);
    lp.mean_pairs.push_back(sums.mean_pairs);
    lp.log_z.push_back(sums.log_z - side * side * std::log(static_cast<double>(classes)));
  }
  return lp;
}

}  // namespace

TEST_CASE("path sampling finds ln Z of small free fields") {
  // Bound: 0.5 % of ln Z(beta) - ln Z(0), about the largest error seen over four seeds
  // (measured: .16 % at 8 x 8, .27 % at 12 x 12, .56 % at 6 x 6 with three labels near beta = 0).
  const Neighbourhood four = make_neighbourhood(Connectivity::kFour);
  struct Case {
    int side, classes;
  };
  for (const Case& c : {Case{8, 2}, {12, 2}, {6, 3}}) {
    const LogPartition lp =
        integrate_log_partition({c.side, c.side}, four, c.classes, 5, Pool(1), 1000);
    CHECK(lp.beta.front() == 0.0);
    CHECK(lp.max_beta() == Approx(max_coupling(four, c.classes)));
    CHECK(std::is_sorted(lp.beta.begin(), lp.beta.end()));
    const double base = c.side * c.side * std::log(static_cast<double>(c.classes));
    for (const double share : {0.1, 0.3, 0.4, 0.45, 0.6, 1.0}) {
      const double beta = share * lp.max_beta();
      const double exact = sum_strip(c.side, c.side, c.classes, beta).log_z - base;
      CAPTURE(c.side, c.classes, beta, exact, lp.log_z_at(beta));
      CHECK(lp.log_z_at(beta) == Approx(exact).epsilon(0.005));
    }
    // E[S] itself, in units of all pairs.
    const double pairs = 2.0 * c.side * (c.side - 1);
    for (std::size_t i = 0; i < lp.beta.size(); i += 8) {
      const double exact = sum_strip(c.side, c.side, c.classes, lp.beta[i]).mean_pairs;
      CAPTURE(c.side, c.classes, lp.beta[i]);
      CHECK(std::fabs(lp.mean_pairs[i] - exact) / pairs < 0.03);
    }
  }
}

TEST_CASE("the integral of a larger field comes from a cell of 256 pixels a side") {
  const Neighbourhood four = make_neighbourhood(Connectivity::kFour);
  const Pool pool(1);
  const LogPartition cell = integrate_log_partition({256, 8}, four, 2, 5, pool, 8);
  const LogPartition wide = integrate_log_partition({1024, 8}, four, 2, 5, pool, 8);
  const double cell_pairs = 255 * 8 + 256 * 7, wide_pairs = 1023 * 8 + 1024 * 7;
  for (std::size_t i = 0; i < cell.beta.size(); ++i) {
    CHECK(wide.mean_pairs[i] / wide_pairs == Approx(cell.mean_pairs[i] / cell_pairs));
  }
}

TEST_CASE("ln Z between grid points is the integral of a linear E[S]") {
  LogPartition lp;
  lp.beta = {0.0, 1.0, 3.0};
  lp.mean_pairs = {2.0, 4.0, 8.0};
  lp.log_z = {0.0, 3.0, 15.0};
  CHECK(lp.log_z_at(0.0) == 0.0);
  CHECK(lp.log_z_at(0.5) == Approx(1.25));  // integral of 2 + 2 b
  CHECK(lp.log_z_at(1.0) == Approx(3.0));
  CHECK(lp.log_z_at(2.0) == Approx(8.0));
  CHECK(lp.log_z_at(3.0) == Approx(15.0));
}

TEST_CASE("draws of the coupling follow exp(beta S - ln Z)") {
  // Kolmogorov-Smirnov at a false-alarm level of 1e-3 against the integral on a fine grid.
  const int side = 8;
  const double last = max_coupling(make_neighbourhood(Connectivity::kFour), 2);
  const LogPartition lp = exact_partition(side, 2, last);
  const double pairs = 2.0 * side * (side - 1);
  for (const double share : {0.3, 0.5, 0.7, 0.85, 0.97, 1.0}) {
    constexpr int kCells = 20000;
    const double s = share * pairs;
    std::vector<double> below{0.0};
    double top = -1e300;
    const auto log_density = [&](double b) { return b * s - lp.log_z_at(b); };
    for (int i = 0; i <= kCells; ++i) top = std::max(top, log_density(last * i / kCells));
    for (int i = 0; i < kCells; ++i) {
      below.push_back(below.back() + std::exp(log_density(last * (i + 0.5) / kCells) - top));
    }
    constexpr int kDraws = 4000;
    RandomStream random(chain_key(6, 0), Purpose::kParameters);
    std::vector<double> u;
    for (int i = 0; i < kDraws; ++i) {
      const double at = draw_coupling(lp, s, random) / last * kCells;
      const auto cell = std::min(static_cast<std::size_t>(at), below.size() - 2);
      const double inside = at - static_cast<double>(cell);
      u.push_back((below[cell] + inside * (below[cell + 1] - below[cell])) / below.back());
    }
    std::sort(u.begin(), u.end());
    double distance = 0.0;
    for (int i = 0; i < kDraws; ++i) {
      const double v = u[static_cast<std::size_t>(i)] * kDraws;
      distance = std::max({distance, v - i, i + 1 - v});
    }
    CAPTURE(share, u.front(), u.back());
    CHECK(distance / std::sqrt(static_cast<double>(kDraws)) < 1.9495);
  }
}

TEST_CASE("the coupling's range scales with the neighbours' weights") {
  // Potts 1952: ln(1 + sqrt q) for 4 neighbours.
  const Neighbourhood four = make_neighbourhood(Connectivity::kFour);
  CHECK(transition_coupling(four, 2) == Approx(0.8813735870));
  CHECK(transition_coupling(four, 3) == Approx(1.0050525387));
  CHECK(transition_coupling(four, 4) == Approx(1.0986122887));
  const Neighbourhood eight = make_neighbourhood(Connectivity::kEight);
  CHECK(transition_coupling(eight, 2) * eight.total_weight() == Approx(4 * 0.8813735870));
  CHECK(max_coupling(four, 2) > 2.0 * transition_coupling(four, 2));
}
