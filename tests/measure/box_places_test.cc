// Places of boxes against counting them one by one, and the border correction they give: exact,
// because every place a particle may have fallen to is enumerated.
#include "measure/box_places.h"

#include <catch2/catch.hpp>
#include <cmath>

#include "measure/particles.h"
#include "random/stream.h"

using namespace stillfield;

namespace {

std::int64_t counted(View<const std::uint8_t> usable, int width, int height) {
  std::int64_t places = 0;
  for (int top = 1; top + height < usable.height(); ++top) {
    for (int left = 1; left + width < usable.width(); ++left) {
      bool free = true;
      for (int y = top - 1; y <= top + height; ++y) {
        for (int x = left - 1; x <= left + width; ++x) free = free && usable.at(x, y) != 0;
      }
      places += free;
    }
  }
  return places;
}

// A round region with random holes.
Volume<std::uint8_t> region(int width, int height, double holes) {
  RandomStream random(chain_key(11, 0), Purpose::kSimulation);
  Volume<std::uint8_t> usable({width, height});
  for (int y = 0; y < height; ++y) {
    for (int x = 0; x < width; ++x) {
      const double dx = (x + 0.5) / width - 0.5, dy = (y + 0.5) / height - 0.5;
      const bool hole = random.uniform() < holes;
      usable.at(x, y) = dx * dx + dy * dy < 0.25 && !hole ? 255 : 0;
    }
  }
  return usable;
}

// A disc of radius 8 in the frame, centred at (x, y), as far as the frame shows it.
Volume<std::uint8_t> disc_at(int side, int cx, int cy) {
  Volume<std::uint8_t> labels({side, side});
  for (int y = 0; y < side; ++y) {
    for (int x = 0; x < side; ++x) {
      labels.at(x, y) = (x - cx) * (x - cx) + (y - cy) * (y - cy) <= 60 ? 2 : 1;
    }
  }
  return labels;
}

}  // namespace

TEST_CASE("places of boxes are those counted one by one") {
  for (const double holes : {0.0, 0.004, 0.1}) {
    const Volume<std::uint8_t> usable = region(41, 30, holes);
    const BoxPlaces boxes(usable.extent(), usable.view(), 60, 60);
    const BoxPlaces small(usable.extent(), usable.view(), 7, 5);
    for (int h = 1; h <= 30; ++h) {
      for (int w = 1; w <= 41; ++w) {
        CAPTURE(holes, w, h);
        REQUIRE(boxes.places(w, h) == counted(usable.view(), w, h));
        if (w <= 7 && h <= 5) REQUIRE(small.places(w, h) == boxes.places(w, h));
      }
    }
  }
  const BoxPlaces frame({20, 10}, {}, 0, 0);
  CHECK(frame.area() == 200);
  CHECK(frame.places(4, 3) == (20 - 4 - 1) * (10 - 3 - 1));
  CHECK(frame.places(19, 3) == 0);
}

// One disc 15 pixels wide a place, over all places near and in a frame of 60: four particles wide.
TEST_CASE("edge correction in a field four particles wide has no bias: all places enumerated") {
  const int side = 60;
  double weights = 0;
  int whole = 0;
  for (int cy = -10; cy < side + 10; ++cy) {
    for (int cx = -10; cx < side + 10; ++cx) {
      const auto labels = disc_at(side, cx, cy);
      for (const Particle& p : find_particles(labels.view(), 2, {}, {8, 1}).list) {
        weights += p.weight;
        whole += p.on_border ? 0 : 1;
      }
    }
  }
  CHECK(weights == Approx(side * side).epsilon(1e-12));  // one disc a pixel of the field
  CHECK(whole == 44 * 44);                               // without weights 46 % of them are missed
}

TEST_CASE("edge correction in a round region of interest has no bias either") {
  const int side = 60;
  const Volume<std::uint8_t> usable = region(side, side, 0);
  double weights = 0;
  std::int64_t area = 0;
  for (int cy = -10; cy < side + 10; ++cy) {
    for (int cx = -10; cx < side + 10; ++cx) {
      const auto labels = disc_at(side, cx, cy);
      for (const Particle& p : find_particles(labels.view(), 2, usable.view(), {8, 1}).list) {
        weights += p.weight;
      }
      if (cx >= 0 && cy >= 0 && cx < side && cy < side) area += usable.at(cx, cy) != 0;
    }
  }
  CHECK(weights == Approx(static_cast<double>(area)).epsilon(1e-12));
}
