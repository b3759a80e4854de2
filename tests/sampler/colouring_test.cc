// The colour-split layout: a proper colouring, a one-to-one map of pixels, and no pixel lost.
#include "sampler/colouring.h"

#include <catch2/catch.hpp>
#include <set>
#include <vector>

#include "core/error.h"
#include "random/stream.h"

using namespace stillfield;

namespace {

struct Shape {
  Connectivity connectivity;
  Extent extent;
};

std::vector<Shape> shapes() {
  std::vector<Shape> all;
  for (const Extent& e : {Extent{1, 1},
                          {1, 2},
                          {2, 1},
                          {1, 9},
                          {9, 1},
                          {2, 2},
                          {3, 3},
                          {16, 5},
                          {31, 7},
                          {33, 4},
                          {127, 3},
                          {128, 3},
                          {129, 3},
                          {257, 6}}) {
    all.push_back({Connectivity::kFour, e});
    all.push_back({Connectivity::kEight, e});
  }
  for (const Extent& e : {Extent{1, 1, 1}, {1, 1, 5}, {4, 3, 2}, {5, 4, 3}, {130, 3, 4}}) {
    all.push_back({Connectivity::kSix, e});
    all.push_back({Connectivity::kTwentySix, e});
  }
  return all;
}

template <class Visit>
void for_each_pixel(const Extent& e, const Visit& visit) {
  for (int z = 0; z < e.depth; ++z) {
    for (int y = 0; y < e.height; ++y) {
      for (int x = 0; x < e.width; ++x) visit(x, y, z);
    }
  }
}

bool inside(const Extent& e, int x, int y, int z) {
  return x >= 0 && x < e.width && y >= 0 && y < e.height && z >= 0 && z < e.depth;
}

std::size_t label_place(const Colouring& c, const Site& s) {
  return c.label_row(s.colour, s.slice, s.row) + c.byte_of(s.column);
}

}  // namespace

TEST_CASE("no two neighbours share a colour") {
  for (const Shape& shape : shapes()) {
    const Colouring c(shape.extent, make_neighbourhood(shape.connectivity));
    int clashes = 0;
    for_each_pixel(shape.extent, [&](int x, int y, int z) {
      for (const NeighbourRing& ring : c.neighbourhood().rings) {
        for (const Displacement& d : ring.neighbours) {
          if (!inside(shape.extent, x + d.x, y + d.y, z + d.z)) continue;
          clashes += c.site(x, y, z).colour == c.site(x + d.x, y + d.y, z + d.z).colour;
        }
      }
    });
    CAPTURE(shape.extent.width, shape.extent.height, static_cast<int>(shape.connectivity));
    CHECK(clashes == 0);
  }
}

TEST_CASE("every pixel has one place, and rows know their pixels") {
  for (const Shape& shape : shapes()) {
    CAPTURE(shape.extent.width, shape.extent.height, shape.extent.depth,
            static_cast<int>(shape.connectivity));
    const Colouring c(shape.extent, make_neighbourhood(shape.connectivity));
    std::set<std::size_t> places;
    bool agree = true;
    std::int64_t sites = 0;
    for (int colour = 0; colour < c.colours(); ++colour) {
      for (int slice = 0; slice < c.slices(colour); ++slice) {
        for (int row = 0; row < c.rows(colour); ++row) {
          for (int j = 0; j < c.sites(colour, slice, row); ++j, ++sites) {
            const Site s = c.site(c.first_x(colour, slice, row) + 2 * j, c.y_of(colour, row),
                                  c.z_of(colour, slice));
            agree =
                agree && s.colour == colour && s.slice == slice && s.row == row && s.column == j;
            places.insert(label_place(c, s));
          }
        }
      }
    }
    CHECK(agree);
    CHECK(sites == shape.extent.sites());
    CHECK(static_cast<std::int64_t>(places.size()) == sites);
    CHECK(*places.rbegin() < c.label_bytes());
  }
}

TEST_CASE("labels come back from the split layout, and guards surround them") {
  for (const Shape& shape : shapes()) {
    CAPTURE(shape.extent.width, shape.extent.height, shape.extent.depth,
            static_cast<int>(shape.connectivity));
    const Colouring c(shape.extent, make_neighbourhood(shape.connectivity));
    Volume<std::uint8_t> image(shape.extent), back(shape.extent);
    RandomStream random(chain_key(1, 2), Purpose::kSimulation);
    for_each_pixel(shape.extent, [&](int x, int y, int z) {
      image.at(x, y, z) = static_cast<std::uint8_t>(random.word() % 64);
    });
    AlignedBuffer<std::uint8_t> labels = guarded_labels(c);
    scatter_labels(c, image.view(), labels);
    gather_labels(c, labels, back.view());
    bool same = true, neighbours = true;
    for_each_pixel(shape.extent, [&](int x, int y, int z) {
      same = same && image.at(x, y, z) == back.at(x, y, z);
      // What the kernels will read through the band's offsets.
      const Site s = c.site(x, y, z);
      const LabelBand band = c.band(s.colour, s.slice);
      for (std::size_t r = 0; r < c.neighbourhood().rings.size(); ++r) {
        const auto& ring = c.neighbourhood().rings[r].neighbours;
        for (std::size_t i = 0; i < ring.size(); ++i) {
          const int nx = x + ring[i].x, ny = y + ring[i].y, nz = z + ring[i].z;
          const auto read = static_cast<std::size_t>(
              static_cast<std::ptrdiff_t>(label_place(c, s)) +
              band.rings[r].offset[static_cast<std::size_t>(s.row & 1)][i]);
          const int expected =
              inside(shape.extent, nx, ny, nz) ? image.at(nx, ny, nz) : int{kGuardLabel};
          neighbours = neighbours && read < labels.size() && labels[read] == expected;
        }
      }
    });
    CHECK(same);
    CHECK(neighbours);
  }
}

TEST_CASE("a plane's neighbourhood refuses a volume") {
  CHECK_THROWS_AS(Colouring({4, 4, 2}, make_neighbourhood(Connectivity::kFour)), Error);
  CHECK_THROWS_AS(Colouring({4, 4, 2}, make_neighbourhood(Connectivity::kEight)), Error);
}
