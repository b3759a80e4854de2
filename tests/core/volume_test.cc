#include "core/volume.h"

#include <catch2/catch.hpp>
#include <cstdint>

using namespace stillfield;

TEST_CASE("rows of a volume start on 64-byte boundaries and do not overlap") {
  for (const int width : {1, 15, 16, 17, 64, 65}) {
    Volume<float> v({width, 3, 2});
    for (int z = 0; z < 2; ++z) {
      for (int y = 0; y < 3; ++y) {
        CHECK(reinterpret_cast<std::uintptr_t>(v.row(y, z)) % 64 == 0);
        for (int x = 0; x < width; ++x) v.at(x, y, z) = static_cast<float>(100 * z + 10 * y + x);
      }
    }
    for (int z = 0; z < 2; ++z) {
      for (int y = 0; y < 3; ++y) {
        for (int x = 0; x < width; ++x) {
          CHECK(v.at(x, y, z) == static_cast<float>(100 * z + 10 * y + x));
        }
      }
    }
  }
}

TEST_CASE("a volume starts zeroed and a plane has depth one") {
  const Volume<std::uint16_t> v({7, 5});
  CHECK(v.depth() == 1);
  CHECK(v.extent().sites() == 35);
  for (int y = 0; y < 5; ++y) {
    for (int x = 0; x < 7; ++x) CHECK(v.at(x, y) == 0);
  }
}
