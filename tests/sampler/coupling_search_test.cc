// The search for the coupling: prefers what predicts held-out pixels, whoever counts.
#include "sampler/coupling_search.h"

#include <algorithm>
#include <catch2/catch.hpp>

#include "random/stream.h"
#include "sampler/path_sampling.h"
#include "sampler/starts.h"

using namespace stillfield;

namespace {

constexpr int kSide = 96;

// Two grey values 100 and 200 with noise: `block` > 1 gives squares of that side, 1 independent
// pixels.
GreyLevels checkered_image(int block, double noise) {
  Volume<float> image({kSide, kSide});
  RandomStream random(chain_key(21, static_cast<std::uint32_t>(block)), Purpose::kSimulation);
  for (int y = 0; y < kSide; ++y) {
    for (int x = 0; x < kSide; ++x) {
      const bool bright = block > 1 ? (x / block + y / block) % 2 == 1 : random.uniform() < 0.5;
      image.at(x, y) = static_cast<float>((bright ? 200.0 : 100.0) + noise * random.normal());
    }
  }
  return make_grey_levels(image.view());
}

CouplingChoice search(const GreyLevels& grey, int threads) {
  const Colouring colouring(grey.level.extent(), make_neighbourhood(Connectivity::kFour));
  const ObservedField field = observe(colouring, grey);
  ChainSettings settings;
  settings.classes = 2;
  settings.chains = 2;
  settings.seed = 5;
  const std::vector<LabelChain> chains = start_chains(field, settings);
  return search_coupling(field, default_prior(grey, chains.front().model.classes), chains,
                         Pool(threads));
}

double transition() {
  return transition_coupling(make_neighbourhood(Connectivity::kFour), 2);
}

}  // namespace

TEST_CASE("the coupling chosen lies within a rising ladder that spans the transition") {
  const CouplingChoice choice = search(checkered_image(16, 60.0), 2);
  REQUIRE(choice.ladder.size() > 3);
  CHECK(std::is_sorted(choice.ladder.begin(), choice.ladder.end(),
                       [](const auto& a, const auto& b) { return a.beta < b.beta; }));
  CHECK(choice.ladder.front().beta < transition());
  CHECK(choice.ladder.back().beta > 2.0 * transition());
  CHECK(choice.beta >= choice.ladder.front().beta);
  CHECK(choice.beta <= choice.ladder.back().beta);
  CHECK(choice.alpha.size() == 2);
}

TEST_CASE("large squares call for a strong coupling, independent pixels for a weak one") {
  const CouplingChoice squares = search(checkered_image(16, 60.0), 2);
  const CouplingChoice pixels = search(checkered_image(1, 15.0), 2);
  CHECK(squares.beta > 1.2 * transition());
  CHECK(squares.ladder.front().score < squares.ladder[3].score);
  CHECK(pixels.beta < transition());
  CHECK(pixels.ladder.front().score > pixels.ladder.back().score);
}

TEST_CASE("the choice does not depend on the number of threads") {
  const GreyLevels grey = checkered_image(8, 80.0);
  const CouplingChoice one = search(grey, 1);
  const CouplingChoice four = search(grey, 4);
  CHECK(one.beta == four.beta);
  CHECK(one.alpha == four.alpha);
}
