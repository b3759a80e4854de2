#include "random/counters.h"

#include <catch2/catch.hpp>
#include <set>
#include <string_view>
#include <vector>

using namespace stillfield;

namespace {

std::uint64_t seed_of(std::uint64_t seed, std::string_view digest, std::uint32_t page) {
  const std::vector<std::uint8_t> bytes(digest.begin(), digest.end());
  return image_seed(seed, bytes, page);
}

}  // namespace

TEST_CASE("one Philox block serves two columns and two rows") {
  const PhiloxKey key{7, 11};
  const std::uint32_t word3 = counter_word3(Purpose::kLabels, 1, 5);
  for (std::uint32_t row = 0; row < 6; ++row) {
    for (std::uint32_t column = 0; column < 6; ++column) {
      const PhiloxCounter x = philox4x32({column / 2, row / 2, 9, word3}, key);
      const std::size_t place[2][2] = {{1, 0}, {3, 2}};  // [row parity][column parity]
      CHECK(pixel_word(key, row, column, 9, word3) == x[place[row % 2][column % 2]]);
    }
  }
}

TEST_CASE("words of different pixels, sweeps, colours, slices and purposes have different names") {
  std::set<std::uint32_t> words;
  int asked = 0;
  for (const Purpose purpose : {Purpose::kLabels, Purpose::kLogZ}) {
    for (std::uint32_t colour = 0; colour < 8; ++colour) {
      for (const std::uint32_t slice : {0u, 1u, kMaxSlices - 1}) {
        words.insert(counter_word3(purpose, colour, slice));
        ++asked;
      }
    }
  }
  CHECK(static_cast<int>(words.size()) == asked);
  CHECK(counter_word3(Purpose::kLogZ, 7, 0) != counter_word3(Purpose::kSimulation, 0, 0));
}

TEST_CASE("chains of an image have different keys") {
  std::set<PhiloxKey> keys;
  for (std::uint32_t chain = 0; chain < 64; ++chain)
    keys.insert(chain_key(0x123456789abcdefULL, chain));
  CHECK(keys.size() == 64);
}

TEST_CASE("an image's seed depends on the user's seed, every byte of the digest and the page") {
  const std::uint64_t base = seed_of(1, "abcdefgh", 0);
  CHECK(seed_of(1, "abcdefgh", 0) == base);
  std::set<std::uint64_t> seeds{base};
  for (const auto seed :
       {seed_of(2, "abcdefgh", 0), seed_of(1ULL << 40, "abcdefgh", 0), seed_of(1, "abcdefgh", 1),
        seed_of(1, "abcdefg", 0), seed_of(1, "abcdefgi", 0), seed_of(1, "bbcdefgh", 0),
        seed_of(1, "abcdhgfe", 0), seed_of(1, "efghabcd", 0), seed_of(1, "", 0)}) {
    CHECK(seeds.insert(seed).second);
  }
}
