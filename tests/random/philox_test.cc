#include "random/philox.h"

#include <Random123/philox.h>
#undef philox4x32  // a macro of that header

#include <catch2/catch.hpp>
#include <fstream>
#include <sstream>
#include <string>

using namespace stillfield;

TEST_CASE("Philox gives the published known answers") {
  std::ifstream file(std::string(STILLFIELD_SOURCE_DIR) + "/tests/golden/philox4x32.txt");
  REQUIRE(file);
  int vectors = 0;
  for (std::string line; std::getline(file, line);) {
    if (line.empty() || line[0] == '#') continue;
    CAPTURE(line);
    std::istringstream words(line);
    words >> std::hex;
    PhiloxCounter counter{}, expected{};
    PhiloxKey key{};
    for (std::uint32_t& w : counter) words >> w;
    for (std::uint32_t& w : key) words >> w;
    for (std::uint32_t& w : expected) words >> w;
    REQUIRE(words);
    CHECK(philox4x32(counter, key) == expected);
    ++vectors;
  }
  CHECK(vectors == 3);
}

// Outside reference: Random123, the library of the authors of Philox (Debian: librandom123-dev).
TEST_CASE("Philox agrees with Random123 on 200000 counters and keys") {
  r123::Philox4x32 outside;
  std::uint32_t state = 1;
  const auto next = [&state] { return state = state * 1664525u + 1013904223u; };
  int different = 0;
  for (int i = 0; i < 200000; ++i) {
    PhiloxCounter counter{};
    PhiloxKey key{};
    for (std::uint32_t& w : counter) w = next() ^ next() >> 16;
    for (std::uint32_t& w : key) w = next() ^ next() >> 16;
    const r123::Philox4x32::ctr_type outside_counter = {
        {counter[0], counter[1], counter[2], counter[3]}};
    const r123::Philox4x32::key_type outside_key = {{key[0], key[1]}};
    const auto expected = outside(outside_counter, outside_key);
    const PhiloxCounter got = philox4x32(counter, key);
    for (std::size_t j = 0; j < 4; ++j) different += got[j] != expected[j];
  }
  CHECK(different == 0);
}
