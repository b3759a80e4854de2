#include "model/neighbourhood.h"

#include <catch2/catch.hpp>
#include <cmath>
#include <set>
#include <tuple>

#include "core/error.h"

using namespace stillfield;

namespace {

// Every neighbour weighs nearest distance over distance, occurs once and has its opposite.
void check(const Neighbourhood& n, double spacing_z, double nearest) {
  std::set<std::tuple<int, int, int>> seen;
  for (const NeighbourRing& ring : n.rings) {
    for (const Displacement& d : ring.neighbours) {
      const double distance = std::sqrt(d.x * d.x + d.y * d.y + spacing_z * spacing_z * d.z * d.z);
      CHECK(ring.weight == Approx(nearest / distance));
      CHECK(seen.insert({d.x, d.y, d.z}).second);
    }
  }
  for (const auto& [x, y, z] : seen) CHECK(seen.count({-x, -y, -z}) == 1);
  CHECK(static_cast<int>(seen.size()) == static_cast<int>(n.connectivity));
}

}  // namespace

TEST_CASE("planes have 4 neighbours, or 8 with the diagonal ones at 1 / sqrt 2") {
  const Neighbourhood four = make_neighbourhood(Connectivity::kFour);
  check(four, 1.0, 1.0);
  CHECK(four.rings.size() == 1);
  CHECK(four.total_weight() == 4.0);
  const Neighbourhood eight = make_neighbourhood(Connectivity::kEight);
  check(eight, 1.0, 1.0);
  REQUIRE(eight.rings.size() == 2);
  CHECK(eight.rings[0].weight == 1.0);
  CHECK(eight.rings[1].weight == Approx(1.0 / std::sqrt(2.0)));
  CHECK(eight.total_weight() == Approx(4.0 + 4.0 / std::sqrt(2.0)));
}

TEST_CASE("volumes weigh neighbours by their real distance") {
  const Neighbourhood cube = make_neighbourhood(Connectivity::kTwentySix);
  check(cube, 1.0, 1.0);
  CHECK(cube.rings.size() == 3);
  CHECK(cube.total_weight() == Approx(6.0 + 12.0 / std::sqrt(2.0) + 8.0 / std::sqrt(3.0)));
  const Neighbourhood thick = make_neighbourhood(Connectivity::kTwentySix, 3.0);
  check(thick, 3.0, 1.0);
  CHECK(thick.rings.size() == 5);
  const Neighbourhood thin = make_neighbourhood(Connectivity::kTwentySix, 0.5);
  check(thin, 0.5, 0.5);
  CHECK(thin.rings.front().neighbours.size() == 2);
  check(make_neighbourhood(Connectivity::kSix), 1.0, 1.0);
  check(make_neighbourhood(Connectivity::kSix, 2.0), 2.0, 1.0);
}

TEST_CASE("a distance between slices that is no distance is refused") {
  for (const double spacing : {0.0, -1.0, std::nan("")}) {
    CHECK_THROWS_AS(make_neighbourhood(Connectivity::kSix, spacing), Error);
  }
}
