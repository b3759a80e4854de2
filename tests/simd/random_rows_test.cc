#include "simd/random_rows.h"

#include <catch2/catch.hpp>
#include <vector>

#include "core/aligned_buffer.h"
#include "random/counters.h"
#include "simd/forced_target.h"

using namespace stillfield;
using namespace stillfield::testing;

namespace {

int wrong_words(const RandomPlane& plane, std::uint32_t pair, int columns) {
  const std::size_t room = round_up(static_cast<std::size_t>(columns), 16);
  AlignedBuffer<std::uint32_t> even(room), odd(room);
  random_row_pair(plane, pair, columns, even.data(), odd.data());
  int wrong = 0;
  for (int j = 0; j < columns; ++j) {
    const std::uint32_t column = plane.first_column + static_cast<std::uint32_t>(j);
    const std::uint32_t row = plane.first_row + 2 * pair;
    const auto i = static_cast<std::size_t>(j);
    wrong += even[i] != pixel_word(plane.key, row, column, plane.sweep, plane.word3);
    wrong += odd[i] != pixel_word(plane.key, row + 1, column, plane.sweep, plane.word3);
  }
  return wrong;
}

}  // namespace

TEST_CASE("random rows hold the word of each pixel, at every width and target") {
  for_each_target([](const std::string& target) {
    CAPTURE(target);
    std::vector<int> widths{255, 256, 257, 258, 259, 260, 1536};
    for (int w = 1; w <= 70; ++w) widths.push_back(w);
    RandomPlane plane{{0xdeadbeefu, 0xfeedf00du}, 17, counter_word3(Purpose::kLabels, 3, 12), 0, 0};
    for (const int width : widths) {
      CAPTURE(width);
      CHECK(wrong_words(plane, 0, width) == 0);
      CHECK(wrong_words(plane, 5, width) == 0);
    }
  });
}

TEST_CASE("random rows of tiles anywhere in a huge grid") {
  for_each_target([](const std::string& target) {
    CAPTURE(target);
    for (const std::uint32_t column : {0u, 2u, 6u, 1000000u, 0x7ffffffeu, 0xffff0000u}) {
      for (const std::uint32_t row : {0u, 2u, 14u, 0xfffffff0u}) {
        for (const std::uint32_t word3 : {0u, 0xffffffffu}) {
          CAPTURE(column, row, word3);
          CHECK(wrong_words({{1, 2}, 0xffffffffu, word3, column, row}, 3, 67) == 0);
        }
      }
    }
    CHECK(wrong_words({{0xffffffffu, 0xffffffffu}, 0, 0, 0, 0}, 0, 67) == 0);
  });
}
