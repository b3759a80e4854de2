// The vector normals against the scalar ones: the same bits, on every CPU target.
#include "simd/normals.h"

#include <algorithm>
#include <catch2/catch.hpp>
#include <cstring>
#include <vector>

#include "core/aligned_buffer.h"
#include "random/normal.h"
#include "simd/forced_target.h"

using namespace stillfield;
using namespace stillfield::testing;

namespace {

const PhiloxKey kKey{0x1234567u, 0x89abcdefu};

std::uint32_t word_of(PhiloxCounter first, std::size_t i) {
  first[0] += static_cast<std::uint32_t>(i / 4);
  return philox4x32(first, kKey)[i % 4];
}

}  // namespace

TEST_CASE("sequences of normals have the scalar version's bits at every length") {
  for_each_target([](const std::string& target) {
    for (std::size_t n = 0; n < 300; n += n < 70 ? 1 : 7) {
      const PhiloxCounter first{static_cast<std::uint32_t>(1000 * n), 7, 0xfffffff0u, 12345};
      std::vector<float> expected(n + 2, 99.0f), z(n + 2, 99.0f);
      for (std::size_t i = 0; i < n; ++i) expected[i + 1] = standard_normal(word_of(first, i));
      standard_normals(kKey, first, n, z.data() + 1);  // not aligned
      CAPTURE(target, n);
      REQUIRE(std::memcmp(z.data(), expected.data(), z.size() * sizeof(float)) == 0);
    }
  });
}

TEST_CASE("a long sequence of normals has the scalar version's bits in the far tail too") {
  constexpr std::size_t kCount = std::size_t{1} << 21;
  const PhiloxCounter first{0xfff00000u, 1, 2, 3};
  std::vector<float> expected(kCount), z(kCount);
  std::uint32_t least = ~0u;
  for (std::size_t i = 0; i < kCount; i += 4) {
    PhiloxCounter at = first;
    at[0] += static_cast<std::uint32_t>(i / 4);
    const PhiloxCounter block = philox4x32(at, kKey);
    for (std::size_t j = 0; j < 4; ++j) {
      expected[i + j] = standard_normal(block[j]);
      least = std::min({least, block[j], ~block[j]});
    }
  }
  CHECK(least < 1u << 13);  // beyond the binades that registers hold
  for_each_target([&](const std::string& target) {
    std::fill(z.begin(), z.end(), 0.0f);
    standard_normals(kKey, first, kCount, z.data());
    CAPTURE(target);
    CHECK(std::memcmp(z.data(), expected.data(), kCount * sizeof(float)) == 0);
  });
}

TEST_CASE("rows of normals are those of the rows' random words") {
  const RandomPlane plane{kKey, 5, 77, 12, 8};
  constexpr int kColumns = 1100;
  AlignedBuffer<std::uint32_t> even_words(1104), odd_words(1104);
  for_each_target([&](const std::string& target) {
    CAPTURE(target);
    for (const int columns : {1, 16, 31, kColumns}) {
      AlignedBuffer<float> even(1104), odd(1104);
      random_row_pair(plane, 3, columns, even_words.data(), odd_words.data());
      normal_row_pair(plane, 3, columns, even.data(), odd.data());
      int wrong = 0;
      for (std::size_t i = 0; i < static_cast<std::size_t>(columns); ++i) {
        wrong += even[i] != standard_normal(even_words[i]);
        wrong += odd[i] != standard_normal(odd_words[i]);
      }
      CHECK(wrong == 0);
    }
  });
}
