#include "cli/number_option.h"

#include <catch2/catch.hpp>

using namespace stillfield;

TEST_CASE("whole numbers are taken within their range and nothing else") {
  const auto check = whole_number(2, 64);
  for (const char* good : {"2", "3", "64"}) CHECK(check(good).empty());
  for (const char* bad :
       {"1", "65", "-3", "2.5", "3x", "", " 3", "+3", "0x3", "99999999999999999999999"}) {
    CAPTURE(bad);
    CHECK(check(bad) == "must be a whole number from 2 to 64, not '" + std::string(bad) + "'");
  }
}

TEST_CASE("a number of classes may be left to the data") {
  const auto check = auto_or_whole(2, 64);
  for (const char* good : {"auto", "2", "64"}) CHECK(check(good).empty());
  for (const char* bad : {"Auto", "1", "65", "", "2.5"}) {
    CAPTURE(bad);
    CHECK(check(bad) ==
          "must be auto or a whole number from 2 to 64, not '" + std::string(bad) + "'");
  }
}

TEST_CASE("seeds use all 64 bits") {
  CHECK(parse_whole("18446744073709551615") == ~std::uint64_t{0});
  CHECK_FALSE(parse_whole("18446744073709551616"));
}

TEST_CASE("a blur is auto, none or a number in range") {
  for (const char* good : {"auto", "none", "0.2", "0.85", "3"}) CHECK(check_blur(good).empty());
  for (const char* bad : {"", "None", "0", "-1", "3.01", "nan", "inf", "1px"}) {
    CAPTURE(bad);
    CHECK_FALSE(check_blur(bad).empty());
  }
}

TEST_CASE("a coupling is auto, sampled or a number in range") {
  for (const char* good : {"auto", "sampled", "0", "0.85", "5", "1e-3"}) {
    CHECK(check_coupling(good).empty());
  }
  for (const char* bad : {"", "Auto", "-0.1", "5.01", "nan", "inf", "0,85", "1 "}) {
    CAPTURE(bad);
    CHECK_FALSE(check_coupling(bad).empty());
  }
}

TEST_CASE("lengths with their unit, in micrometres") {
  CHECK(parse_length_um("0.32um") == 0.32);
  CHECK(parse_length_um("320nm") == Approx(0.32));
  CHECK(parse_length_um("0.00032mm") == Approx(0.32));
  CHECK(parse_length_um("2\xc2\xb5m") == 2.0);
  CHECK(parse_length_um("2\xce\xbcm") == 2.0);
  for (const char* text :
       {"", "um", "0.32", "0um", "-1um", "infum", "nanum", "1 um", "1m", "1px"}) {
    CAPTURE(text);
    CHECK_FALSE(parse_length_um(text));
    CHECK_FALSE(check_length(text).empty());
  }
  CHECK(check_length("5nm").empty());
}
