// Components, their boxes, centroids, diameters and perimeters against scikit-image's `label`,
// `regionprops` and `perimeter_crofton`, on label images made here and there by the same rule.
//
// The perimeter of scikit-image is the same Crofton sum over four directions, counted by 2 x 2
// neighbourhoods of the region padded with background. Ours does not count the frame as a border:
// on a padded image the two are the same number up to rounding.
#include <algorithm>
#include <catch2/catch.hpp>
#include <cmath>
#include <fstream>
#include <sstream>
#include <string>
#include <vector>

#include "measure/interface_length.h"
#include "measure/particles.h"

using namespace stillfield;

namespace {

struct Region {
  std::int64_t area = 0;
  int left = 0, top = 0, width = 0, height = 0;
  double x = 0, y = 0, diameter = 0, perimeter = 0;
};

struct Case {
  int width = 0, height = 0, a = 0, b = 0, c = 0, connectivity = 0;
  std::int64_t pixels = 0;
  std::vector<Region> regions;
};

std::vector<Case> read_cases() {
  std::ifstream file(std::string(STILLFIELD_SOURCE_DIR) + "/tests/measure/golden/regions.txt");
  std::vector<Case> cases;
  std::string line;
  std::size_t regions = 0;
  while (std::getline(file, line)) {
    if (line.empty() || line.front() == '#') continue;
    std::istringstream words(line);
    if (line.rfind("case ", 0) == 0) {
      std::string word;
      Case& c = cases.emplace_back();
      words >> word >> c.width >> c.height >> c.a >> c.b >> c.c >> c.connectivity >> c.pixels >>
          regions;
    } else {
      Region& r = cases.back().regions.emplace_back();
      words >> r.area >> r.left >> r.top >> r.width >> r.height >> r.x >> r.y >> r.diameter >>
          r.perimeter;
      REQUIRE(words);
    }
  }
  REQUIRE_FALSE(cases.empty());
  REQUIRE(cases.back().regions.size() == regions);
  return cases;
}

int triangle(int t, int period) {
  t = (t % period + period) % period;
  return std::min(t, period - t) * 4 - period;
}

// The rule of regions_reference.py.
Volume<std::uint8_t> picture(const Case& c) {
  Volume<std::uint8_t> labels({c.width, c.height});
  for (int y = 0; y < c.height; ++y) {
    for (int x = 0; x < c.width; ++x) {
      const int s = triangle(3 * x + 2 * y, c.a) + triangle(x - 4 * y + 1000 * c.b, c.b) +
                    triangle(x * y, c.c);
      labels.at(x, y) = s > 0 ? 2 : 1;
    }
  }
  return labels;
}

// One component in an image with one more pixel of background on every side.
Volume<std::uint8_t> alone(const Particles& all, int component) {
  Volume<std::uint8_t> labels({all.component.width() + 2, all.component.height() + 2});
  for (int y = 0; y < all.component.height(); ++y) {
    for (int x = 0; x < all.component.width(); ++x) {
      labels.at(x + 1, y + 1) = all.component.at(x, y) == component ? 2 : 1;
    }
  }
  return labels;
}

}  // namespace

TEST_CASE("components and their shapes are those scikit-image finds") {
  std::size_t compared = 0;
  for (const Case& c : read_cases()) {
    CAPTURE(c.width, c.height, c.connectivity);
    const Volume<std::uint8_t> labels = picture(c);
    const Particles found = find_particles(labels.view(), 2, {}, {c.connectivity, 1});
    REQUIRE(found.list.size() == c.regions.size());
    std::int64_t pixels = 0;
    for (std::size_t i = 0; i < found.list.size(); ++i) {
      const Particle& p = found.list[i];
      const Region& r = c.regions[i];  // both in row order of the first pixels
      CAPTURE(i);
      CHECK(p.area == r.area);
      CHECK(p.left == r.left);
      CHECK(p.top == r.top);
      CHECK(p.width == r.width);
      CHECK(p.height == r.height);
      CHECK(p.x == Approx(r.x).epsilon(1e-12));
      CHECK(p.y == Approx(r.y).epsilon(1e-12));
      CHECK(equivalent_diameter(static_cast<double>(p.area)) == Approx(r.diameter).epsilon(1e-12));
      CHECK(interface_length(alone(found, p.component).view(), 2, {}) ==
            Approx(r.perimeter).epsilon(1e-12));
      pixels += p.area;
    }
    CHECK(pixels == c.pixels);
    compared += found.list.size();
  }
  CHECK(compared > 200);
}
