// Particles of drawn scenes, whose sizes are known; weights against the formula; and the border
// correction on random disks, whose number a large field tells.
#include "measure/particles.h"

#include <catch2/catch.hpp>
#include <cmath>

#include "measure/interface_length.h"
#include "random/stream.h"

using namespace stillfield;

namespace {

Volume<std::uint8_t> background(int width, int height) {
  Volume<std::uint8_t> labels({width, height});
  for (int y = 0; y < height; ++y) {
    for (int x = 0; x < width; ++x) labels.at(x, y) = 1;
  }
  return labels;
}

void draw_disk(Volume<std::uint8_t>& labels, double cx, double cy, double radius) {
  for (int y = 0; y < labels.height(); ++y) {
    for (int x = 0; x < labels.width(); ++x) {
      if (std::hypot(x - cx, y - cy) <= radius) labels.at(x, y) = 2;
    }
  }
}

}  // namespace

TEST_CASE("rectangles are found with area, box, centroid and border weight") {
  auto labels = background(20, 10);
  for (int y = 2; y < 5; ++y) {
    for (int x = 3; x < 7; ++x) labels.at(x, y) = 2;  // 4 x 3, inside
  }
  for (int x = 15; x < 20; ++x) labels.at(x, 8) = 2;  // cut by the right edge
  labels.at(7, 5) = 2;                                // touches the first by a corner
  labels.at(11, 1) = 2;                               // one pixel
  const Particles eight = find_particles(labels.view(), 2, {}, {8, 1});
  REQUIRE(eight.list.size() == 3);
  const Particles four = find_particles(labels.view(), 2, {}, {4, 1});
  REQUIRE(four.list.size() == 4);
  const Particle* box = nullptr;
  for (const Particle& p : four.list) {
    if (p.area == 12) box = &p;
  }
  REQUIRE(box);
  CHECK(box->width == 4);
  CHECK(box->height == 3);
  CHECK(box->x == Approx(4.5));
  CHECK(box->y == Approx(3.0));
  CHECK_FALSE(box->on_border);
  CHECK(box->weight == Approx(20.0 * 10 / ((20 - 4 - 1) * (10 - 3 - 1))));
  CHECK(four.component.at(4, 3) == box->component);
  for (const Particle& p : four.list) {
    if (p.area == 5) CHECK((p.on_border && p.weight == 0));
  }
  CHECK(find_particles(labels.view(), 2, {}, {8, 6}).list.size() == 1);
  CHECK(find_particles(labels.view(), 3, {}, {8, 1}).list.empty());
}

TEST_CASE("pixels outside the region of interest belong to no particle") {
  auto labels = background(9, 9);
  draw_disk(labels, 4, 4, 2.2);
  auto usable = background(9, 9);
  for (int y = 0; y < 9; ++y) usable.at(4, y) = 0;  // a cut through the middle
  CHECK(find_particles(labels.view(), 2, usable.view(), {8, 1}).list.size() == 2);
}

TEST_CASE("percentiles and means of sizes, weighted") {
  std::vector<Particle> particles(4);
  const std::int64_t areas[] = {10, 20, 30, 1000};
  for (std::size_t i = 0; i < 4; ++i) {
    particles[i].area = areas[i];
    particles[i].weight = 1;
  }
  particles[3].weight = 0;  // on the border
  const ParticleSizes sizes = particle_sizes(particles);
  CHECK(sizes.count == 3);
  CHECK(sizes.mean_area == Approx(20));
  CHECK(sizes.d10 == Approx(equivalent_diameter(10)));
  CHECK(sizes.d50 == Approx(equivalent_diameter(20)));
  CHECK(sizes.d90 == Approx(equivalent_diameter(30)));
  particles[0].weight = 10;
  CHECK(particle_sizes(particles).d50 == Approx(equivalent_diameter(10)));
  CHECK(std::isnan(particle_sizes({}).d50));
  CHECK(particle_sizes({}).count == 0);
  CHECK(equivalent_diameter(M_PI * 25) == Approx(10));  // a circle of radius 5
}

// 200 frames of 64^2 cut from a plane with 4 disks of radius 6 in 64^2 on average (Poisson).
// Standard error of the mean count: about sqrt(4 * 1.6 / 200) = .18; 5 of them: one in 10^6.
TEST_CASE("the weighted number of particles is that of the plane, whatever the frame cuts") {
  const double density = 4.0 / (64 * 64), radius = 6;
  double weighted = 0, uncut = 0;
  const int frames = 200;
  for (int f = 0; f < frames; ++f) {
    RandomStream random(chain_key(3, static_cast<std::uint32_t>(f)), Purpose::kSimulation);
    auto labels = background(64, 64);
    std::vector<std::pair<double, double>> centres;
    const double side = 64 + 4 * radius;
    const auto wanted = random.poisson(density * side * side);
    for (std::int64_t i = 0; i < wanted; ++i) {
      const double cx = side * random.uniform() - 2 * radius;
      const double cy = side * random.uniform() - 2 * radius;
      bool apart = true;  // disks that touch would be one particle: keep them, but count apart
      for (const auto& [x, y] : centres)
        apart = apart && std::hypot(x - cx, y - cy) > 2 * radius + 2;
      centres.emplace_back(cx, cy);
      auto alone = background(64, 64);
      draw_disk(alone, cx, cy, radius);
      for (const Particle& p : find_particles(alone.view(), 2, {}, {8, 1}).list) {
        weighted += p.weight;
        uncut += p.on_border ? 0 : 1;
      }
    }
  }
  CHECK(std::abs(weighted / frames - 4) < 0.9);
  CHECK(uncut / frames < 3.2);  // what a count without weights would say
}

TEST_CASE("the interface of disks and straight borders") {
  auto labels = background(200, 200);
  draw_disk(labels, 99.5, 99.5, 60);
  // A circle is isotropic: 2 pi r up to digitisation.
  CHECK(interface_length(labels.view(), 2, {}) == Approx(2 * M_PI * 60).epsilon(0.02));
  CHECK(interface_length(labels.view(), 1, {}) == interface_length(labels.view(), 2, {}));
  auto half = background(100, 80);
  for (int y = 0; y < 80; ++y) {
    for (int x = 50; x < 100; ++x) half.at(x, y) = 2;
  }
  // Exactly: 80 crossings at 0 degrees, 0 at 90, 79 on each diagonal.
  CHECK(interface_length(half.view(), 2, {}) == Approx(M_PI / 8 * (80 + 2 * 79 / std::sqrt(2.0))));
  // ... which is 5.2 % short of 80, and the ends of two diagonals.
  CHECK(interface_length(half.view(), 2, {}) == Approx(0.948 * 80).epsilon(0.01));
}
