#include "cli/noise_option.h"

#include <catch2/catch.hpp>

using namespace stillfield;
using Catch::Matchers::Contains;

TEST_CASE("kinds of noise, with their numbers and without") {
  CHECK_FALSE(parse_noise("auto")->kind);
  CHECK(parse_noise("gaussian")->kind == NoiseKind::kGaussian);
  CHECK_FALSE(parse_noise("gaussian")->sd);
  CHECK(parse_noise("gaussian:12.5")->sd == 12.5);
  CHECK(parse_noise("rician:3")->kind == NoiseKind::kRician);
  const auto photon = parse_noise("photon:0.5,4,100");
  REQUIRE(photon);
  REQUIRE(photon->photon);
  CHECK(photon->photon->gain == 0.5);
  CHECK(photon->photon->variance == 4);
  CHECK(photon->photon->offset == 100);
  CHECK(parse_noise("photon:1,0")->photon->offset == 0);
}

TEST_CASE("what is no noise is refused with a sentence") {
  for (const char* text : {"", "pink", "gaussian:", "gaussian:x", "gaussian:1,2", "photon:1",
                           "photon:1,2,3,4", "photon:1,,2", "gaussian:inf", "auto:3"}) {
    CAPTURE(text);
    CHECK_THAT(check_noise(text), Contains("must be auto"));
  }
  CHECK_THAT(check_noise("gaussian:0"), Contains("above 0"));
  CHECK_THAT(check_noise("rician:-1"), Contains("above 0"));
  CHECK_THAT(check_noise("photon:0,1"), Contains("gain above 0"));
  CHECK_THAT(check_noise("photon:1,-1"), Contains("variance of at least 0"));
  CHECK(check_noise("photon:1,0").empty());
}

TEST_CASE("shares of impulses") {
  CHECK(check_impulses("auto").empty());
  CHECK(check_impulses("off").empty());
  CHECK(check_impulses("0.1").empty());
  for (const char* text : {"0", "0.5", "-1", "on", ""}) {
    CHECK_FALSE(check_impulses(text).empty());
  }
}
