// Starting points: usable, over-dispersed, and different for every chain.
#include "sampler/starts.h"

#include <algorithm>
#include <catch2/catch.hpp>
#include <set>

#include "core/error.h"
#include "random/stream.h"

using namespace stillfield;

namespace {

// Three vertical stripes with noise.
GreyLevels striped_image(double noise) {
  Volume<float> image({96, 64});
  RandomStream random(chain_key(8, 0), Purpose::kSimulation);
  for (int y = 0; y < 64; ++y) {
    for (int x = 0; x < 96; ++x) {
      image.at(x, y) = static_cast<float>(50.0 + 40.0 * (x / 32) + noise * random.normal());
    }
  }
  return make_grey_levels(image.view());
}

}  // namespace

TEST_CASE("chains start from ordered classes and valid labels that differ") {
  const GreyLevels grey = striped_image(10.0);
  const Colouring colouring(grey.level.extent(), make_neighbourhood(Connectivity::kFour));
  const ObservedField field = observe(colouring, grey);
  ChainSettings settings;
  settings.classes = 3;
  settings.chains = 6;
  settings.seed = 77;
  const std::vector<LabelChain> chains = start_chains(field, settings);
  REQUIRE(chains.size() == 6);
  std::set<std::vector<int>> fields;
  std::set<PhiloxKey> keys;
  for (const LabelChain& chain : chains) {
    const GaussianClasses& classes = chain.model.classes;
    CHECK(classes.mean.size() == 3);
    CHECK(std::is_sorted(classes.mean.begin(), classes.mean.end()));
    CHECK(*std::min_element(classes.sd.begin(), classes.sd.end()) > 0.0);
    CHECK(chain.model.prior.alpha == std::vector<double>(3));
    Volume<std::uint8_t> image(grey.level.extent());
    gather_labels(colouring, chain.labels, image.view());
    std::vector<int> labels;
    for (int y = 0; y < 64; ++y) labels.insert(labels.end(), image.row(y), image.row(y) + 96);
    CHECK(*std::max_element(labels.begin(), labels.end()) == 2);
    fields.insert(labels);
    keys.insert(chain.key);
  }
  CHECK(keys.size() == 6);
  CHECK(fields.size() >= 5);  // chains 0 and 3 start from the same average, then 3 is dispersed
}

TEST_CASE("a fixed coupling is taken as given") {
  const GreyLevels grey = striped_image(10.0);
  const Colouring colouring(grey.level.extent(), make_neighbourhood(Connectivity::kFour));
  ChainSettings settings;
  settings.coupling = {CouplingMode::kFixed, 0.37};
  for (const LabelChain& chain : start_chains(observe(colouring, grey), settings)) {
    CHECK(chain.model.prior.beta == 0.37);
  }
}

TEST_CASE("more classes than grey levels are refused") {
  const GreyLevels grey = striped_image(0.0);
  const Colouring colouring(grey.level.extent(), make_neighbourhood(Connectivity::kFour));
  ChainSettings settings;
  settings.classes = 300;
  CHECK_THROWS_AS(start_chains(observe(colouring, grey), settings), Error);
}

TEST_CASE("the default prior is centred on the image and weak") {
  const GreyLevels grey = striped_image(10.0);
  GaussianClasses start{{50, 90, 130}, {8, 10, 12}, false};
  const GaussianPrior prior = default_prior(grey, start);
  CHECK(prior.mean == Approx(90.0).margin(1.0));
  CHECK(prior.variance == Approx((64.0 + 100.0 + 144.0) / 3.0));
  CHECK(prior.kappa == 0.01);
  CHECK(prior.nu == 2.0);
}
