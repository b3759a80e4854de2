// Probabilities and areas of particles, counted by hand on drawn labels.
#include "measure/particle_table.h"

#include <catch2/catch.hpp>
#include <cmath>

using namespace stillfield;

namespace {

constexpr int kWidth = 24, kHeight = 12;

Volume<std::uint8_t> ground() {
  Volume<std::uint8_t> labels({kWidth, kHeight});
  for (int y = 0; y < kHeight; ++y) {
    for (int x = 0; x < kWidth; ++x) labels.at(x, y) = 1;
  }
  return labels;
}

void box(Volume<std::uint8_t>& labels, int left, int top, int width, int height, int label = 2) {
  for (int y = top; y < top + height; ++y) {
    for (int x = left; x < left + width; ++x) labels.at(x, y) = static_cast<std::uint8_t>(label);
  }
}

void record(ParticleTable& table, int chain, const Volume<std::uint8_t>& drawn) {
  for (int k = 1; k <= 2; ++k) {
    table.record(chain, k, find_particles(drawn.view(), k, {}, {8, 1}));
  }
}

}  // namespace

TEST_CASE("a particle is there when a component is mostly its own, both ways") {
  auto labels = ground();
  box(labels, 2, 2, 4, 4);   // A: 16 pixels
  box(labels, 8, 2, 3, 4);   // B: 12 pixels
  box(labels, 20, 8, 4, 2);  // C: 8 pixels, cut by the right edge
  Volume<float> grey({kWidth, kHeight});
  for (int y = 0; y < kHeight; ++y) {
    for (int x = 0; x < kWidth; ++x) grey.at(x, y) = static_cast<float>(x);
  }
  grey.at(2, 2) = std::nanf("");
  LabelMeasureSettings settings;
  settings.particles = {8, 1};
  ParticleTable table(labels.view(), grey.view(), {}, settings, 2);

  record(table, 0, labels);  // all three, as they are
  auto smaller = ground();   // A half gone: exactly half is not more than half; B moved by one
  box(smaller, 2, 2, 4, 2);
  box(smaller, 9, 2, 3, 4);
  record(table, 0, smaller);
  auto grown = ground();  // A and B one component of 16 + 12 + 8: A is not more than half of it
  box(grown, 2, 2, 9, 4);
  record(table, 1, grown);
  auto joined = ground();  // A and B joined by a bridge of 2: 30, and A more than half
  box(joined, 2, 2, 4, 4);
  box(joined, 8, 2, 3, 4);
  box(joined, 6, 3, 2, 1);
  record(table, 1, joined);

  const std::vector<ParticleRow> rows = table.rows(4);
  // The ground touches all sides: no particle.
  REQUIRE(rows.size() == 3);
  const ParticleRow &a = rows[0], &b = rows[1], &c = rows[2];
  CHECK((a.label == 2 && a.particle.area == 16 && a.particle.component == 1));
  CHECK(a.probability == 0.5);  // first and last draw
  CHECK(a.area_mean == (16 + 30) / 2.0);
  CHECK(a.area_lower90 == Approx(16 + 0.05 * 14));
  CHECK(a.area_upper90 == Approx(16 + 0.95 * 14));
  CHECK(a.mean_intensity == Approx((3 * 2 + 4 * (3 + 4 + 5)) / 15.0));
  CHECK(b.probability == 0.5);  // first and second draw
  CHECK(b.area_mean == 12);
  CHECK(b.particle.component == 2);
  CHECK(c.probability == 0.25);
  CHECK((c.particle.on_border && c.particle.weight == 0));
  CHECK(std::isnan(table.rows(0)[0].probability));
}

TEST_CASE("particles that no draw has, and other classes' components, do not count") {
  auto labels = ground();
  box(labels, 2, 2, 4, 4);
  box(labels, 3, 3, 2, 2, 1);  // a hole: a particle of class 1
  Volume<float> grey({kWidth, kHeight});
  LabelMeasureSettings settings;
  settings.particles = {8, 1};
  ParticleTable table(labels.view(), grey.view(), {}, settings, 1);
  auto filled = ground();
  box(filled, 2, 2, 4, 4);
  record(table, 0, filled);
  const std::vector<ParticleRow> rows = table.rows(1);
  REQUIRE(rows.size() == 2);
  CHECK((rows[0].label == 1 && rows[0].particle.area == 4));
  CHECK(rows[0].probability == 0);
  CHECK(std::isnan(rows[0].area_mean));
  CHECK(rows[1].probability == 1);
  CHECK(rows[1].area_mean == 16);
}
