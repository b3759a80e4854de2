#include "posterior/traces.h"

#include <catch2/catch.hpp>
#include <cmath>

using namespace stillfield;

namespace {

LabelChain chain_with(std::uint64_t first, std::uint64_t second, double beta) {
  LabelChain chain;
  chain.model.classes = {{10.0 + beta, 20.0}, {1.5, 2.5}, false};
  chain.model.prior = {{0.0, 0.0}, beta};
  chain.totals.classes.resize(2);
  chain.totals.classes[0].sites = first;
  chain.totals.classes[1].sites = second;
  chain.totals.equal_pairs = {30, 8};
  return chain;
}

}  // namespace

TEST_CASE("traces hold one value a block, chain and quantity, under the reported names") {
  Traces traces(2, 2, true);
  const Neighbourhood eight = make_neighbourhood(Connectivity::kEight);
  traces.record(0, chain_with(6, 14, 0.5), eight);
  traces.record(1, chain_with(10, 10, 0.6), eight);
  traces.record(0, chain_with(5, 15, 0.7), eight);
  traces.record(1, chain_with(20, 0, 0.8), eight);
  CHECK(traces.draws() == 2);
  const std::vector<Trace>& all = traces.all();
  REQUIRE(all.size() == 8);
  const std::vector<std::pair<std::string, int>> names = {
      {"area_fraction", 1}, {"area_fraction", 2}, {"class_mean", 1},       {"class_mean", 2},
      {"class_sd", 1},      {"class_sd", 2},      {"equal_neighbours", 0}, {"coupling", 0}};
  for (std::size_t i = 0; i < names.size(); ++i) {
    CHECK(all[i].name == names[i].first);
    CHECK(all[i].label == names[i].second);
  }
  CHECK(all[0].chains == std::vector<std::vector<double>>{{0.3, 0.25}, {0.5, 1.0}});
  CHECK(all[1].chains == std::vector<std::vector<double>>{{0.7, 0.75}, {0.5, 0.0}});
  CHECK(all[2].chains == std::vector<std::vector<double>>{{10.5, 10.7}, {10.6, 10.8}});
  CHECK(all[5].chains[1][1] == 2.5);
  CHECK(all[6].chains[0][0] == Approx((30 + 8 / std::sqrt(2.0)) / 20.0));
  CHECK(all[7].chains == std::vector<std::vector<double>>{{0.5, 0.7}, {0.6, 0.8}});
}

TEST_CASE("traces without a sampled coupling do not list it, and clearing keeps their shape") {
  Traces traces(3, 4, false);
  CHECK(traces.all().size() == 10);
  CHECK(traces.all().back().name == "equal_neighbours");
  traces.clear();
  CHECK(traces.draws() == 0);
  CHECK(traces.all().size() == 10);
  CHECK(traces.all().front().chains.size() == 4);
}

TEST_CASE("of a field with unseen pixels the seen ones count, and pairs are not listed") {
  Traces traces(2, 1, false, false);
  LabelChain chain = chain_with(60, 40, 0.5);
  chain.totals.classes[0].observed = 6;
  chain.totals.classes[1].observed = 2;
  traces.record(0, chain, make_neighbourhood(Connectivity::kFour));
  REQUIRE(traces.all().size() == 6);
  CHECK(traces.all()[0].chains[0][0] == 0.75);
  CHECK(traces.all()[1].chains[0][0] == 0.25);
  CHECK(traces.all().back().name == "class_sd");
}
