// A drawn scene whose measurements are counted by hand.
#include "measure/label_measures.h"

#include <catch2/catch.hpp>
#include <cmath>

using namespace stillfield;

TEST_CASE("measurements of a drawn scene, in pixels and in micrometres") {
  // 20 x 10 pixels of class 1 at grey 10, with a 4 x 3 block of class 2 at 50; one pixel
  // unobserved.
  Volume<std::uint8_t> labels({20, 10});
  Volume<float> grey({20, 10});
  for (int y = 0; y < 10; ++y) {
    for (int x = 0; x < 20; ++x) {
      const bool block = x >= 3 && x < 7 && y >= 2 && y < 5;
      labels.at(x, y) = block ? 2 : 1;
      grey.at(x, y) = block ? 50.0f : 10.0f;
    }
  }
  grey.at(3, 2) = std::nanf("");
  LabelMeasureSettings settings;
  const std::vector<MeasureKey> keys = measure_keys(settings);
  const std::vector<double> v = measure_labels(labels.view(), grey.view(), {}, settings);
  REQUIRE(keys.size() == 16);
  REQUIRE(v.size() == keys.size());
  CHECK((keys[8].name == "area_fraction" && keys[8].label == 2 && keys[8].unit == "1"));
  CHECK(v[8] == 12.0 / 200);
  CHECK(v[0] == 188.0 / 200);
  CHECK(v[10] == Approx(200.0 / ((20 - 4 - 1) * (10 - 3 - 1))));
  CHECK(v[11] == 12.0);
  CHECK((keys[13].name == "d50" && keys[13].unit == "px"));
  CHECK(v[13] == Approx(std::sqrt(48 / 3.14159265358979)));
  CHECK(v[15] == 50.0);
  CHECK(v[2] == 0.0);       // the background touches the frame
  CHECK(std::isnan(v[5]));  // and so has no size

  settings.pixel_size_um = 0.5;
  const std::vector<double> um = measure_labels(labels.view(), grey.view(), {}, settings);
  CHECK(measure_keys(settings)[11].unit == "um^2");
  CHECK(um[11] == Approx(3.0));
  CHECK(um[9] == Approx(v[9] / 2));
  CHECK(um[8] == v[8]);
}

TEST_CASE("pixels outside the region of interest are not measured") {
  Volume<std::uint8_t> labels({8, 8});
  Volume<std::uint8_t> usable({8, 8});
  Volume<float> grey({8, 8});
  for (int y = 0; y < 8; ++y) {
    for (int x = 0; x < 8; ++x) {
      labels.at(x, y) = x < 4 ? 1 : 2;
      usable.at(x, y) = x < 6 ? 1 : 0;
      grey.at(x, y) = static_cast<float>(x);
    }
  }
  const std::vector<double> v = measure_labels(labels.view(), grey.view(), usable.view(), {});
  CHECK(v[0] == Approx(32.0 / 48));
  CHECK(v[8] == Approx(16.0 / 48));
  CHECK(v[15] == 4.5);
}
