#include "diagnose/class_facts.h"

#include <algorithm>
#include <catch2/catch.hpp>

#include "diagnose/assessment.h"

using namespace stillfield;

namespace {

Volume<float> constant_map(float value) {
  Volume<float> map({10, 10});
  for (int y = 0; y < 10; ++y) std::fill_n(map.row(y), 10, value);
  return map;
}

GreyLevels observed_everywhere() {
  GreyLevels grey;
  grey.level = Volume<std::uint16_t>({10, 10});
  grey.levels = 1;
  grey.observed = 100;
  return grey;
}

}  // namespace

TEST_CASE("class contrast is the distance of means in root-mean-square deviations") {
  // (30 - 10) / sqrt((3^2 + 1^2) / 2) = 20 / sqrt 5; (31 - 30) / sqrt((1 + 9) / 2) = 1 / sqrt 5.
  const auto facts = contrast_facts({{10, 30, 31}, {3, 1, 3}, false});
  REQUIRE(facts.size() == 2);
  CHECK(facts[0].value == Approx(8.94427191));
  CHECK_FALSE(facts[0].failed);
  CHECK(facts[1].value == Approx(0.447213595));
  CHECK(facts[1].failed);
  CHECK_FALSE(facts[1].grave);
  CHECK(facts[1].sentence.find("classes 2 and 3 overlap") == 0);
}

TEST_CASE("persistence is 1 for settled pixels and p for pixels that flip at random") {
  const auto flipping = support_facts(observed_everywhere(), 2, constant_map(0.3F));
  CHECK(flipping[0].value == Approx(0.3));
  CHECK(flipping[1].value == Approx(0.3));
  CHECK(flipping[1].failed);
  CHECK(flipping[1].grave);
  Volume<float> settled = constant_map(0.0F);
  std::fill_n(settled.row(3), 10, 1.0F);
  const auto firm = support_facts(observed_everywhere(), 1, settled);
  CHECK(firm[0].value == Approx(0.1));
  CHECK(firm[1].value == Approx(1.0));
  CHECK_FALSE(firm[1].failed);
  const auto empty = support_facts(observed_everywhere(), 1, constant_map(0.0F));
  CHECK(empty[0].failed);  // an empty class
}

TEST_CASE("values piled up at the end of the scale are saturation, a wide noise is not") {
  // Class 2: 40 of 100 pixels at the top level, others spread below.
  Volume<float> image({10, 20});
  Volume<std::uint8_t> labels({10, 20});
  for (int y = 0; y < 20; ++y) {
    for (int x = 0; x < 10; ++x) {
      labels.at(x, y) = y < 10 ? 1 : 2;
      image.at(x, y) = static_cast<float>(y < 10 ? 20 + x + y : (x < 4 ? 255 : 200 + 5 * x));
    }
  }
  const GreyLevels grey = make_grey_levels(image.view());
  const auto facts = saturation_facts(grey, labels.view(), {{30, 240}, {5, 15}, false});
  REQUIRE(facts.size() == 2);
  CHECK_FALSE(facts[0].failed);
  CHECK(facts[1].value == Approx(0.4));
  // P(254.5 < N(240, 15) < 255.5) = Phi(1.0333) - Phi(0.9667) = 0.0161 (tables).
  CHECK(facts[1].expected == Approx(0.0161).margin(0.0002));
  CHECK(facts[1].failed);
  CHECK(facts[1].grave);
}

TEST_CASE("shares of uncertain and missing pixels have limits") {
  GreyLevels grey;
  grey.level = Volume<std::uint16_t>({10, 10});
  grey.observed = 70;
  const auto facts = share_facts(grey, 100, 0.1);
  CHECK_FALSE(facts[0].failed);
  CHECK(facts[1].value == Approx(0.3));
  CHECK(facts[1].failed);
}

TEST_CASE("the verdict follows from convergence and checks, grave reasons first") {
  Verdict fine;
  ModelCheck light, grave;
  light.failed = true;
  light.sentence = std::string("a");
  grave.failed = grave.grave = true;
  grave.sentence = std::string("b");
  CHECK(assess(fine, {}).word == kSound);
  CHECK(assess(fine, std::vector<ModelCheck>{ModelCheck{}}).reasons.empty());
  const Assessment look = assess(fine, std::vector<ModelCheck>{light});
  CHECK(look.word == kLook);
  CHECK(look.check_failed);
  const Assessment doubtful = assess(fine, std::vector<ModelCheck>{light, grave});
  CHECK(doubtful.word == kDoubtful);
  CHECK(doubtful.reasons == std::vector<std::string>{"b", "a"});
  Verdict slow{false, {{"x", "x is slow.", 1.5}}};
  CHECK(assess(slow, {}).word == kLook);
  CHECK_FALSE(assess(slow, {}).check_failed);
  slow.misses[0].shortfall = 11;
  CHECK(assess(slow, {}).word == kDoubtful);
}
