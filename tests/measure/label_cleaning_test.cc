// Expected labels are drawn by hand.
#include "measure/label_cleaning.h"

#include <catch2/catch.hpp>
#include <string>

#include "measure/edge_leak.h"
#include "measure/one_particle.h"

using namespace stillfield;

namespace {

Volume<std::uint8_t> labels_of(const std::vector<std::string>& rows) {
  Volume<std::uint8_t> labels(
      {static_cast<int>(rows.front().size()), static_cast<int>(rows.size())});
  for (int y = 0; y < labels.height(); ++y) {
    for (int x = 0; x < labels.width(); ++x) {
      labels.at(x, y) = static_cast<std::uint8_t>(
          rows[static_cast<std::size_t>(y)][static_cast<std::size_t>(x)] - '0');
    }
  }
  return labels;
}

std::vector<std::string> rows_of(const Volume<std::uint8_t>& labels) {
  std::vector<std::string> rows;
  for (int y = 0; y < labels.height(); ++y) {
    std::string& row = rows.emplace_back();
    for (int x = 0; x < labels.width(); ++x) row += static_cast<char>('0' + labels.at(x, y));
  }
  return rows;
}

}  // namespace

TEST_CASE("the majority of nine wins and ties keep the pixel's label") {
  const auto labels = labels_of({"11122",  //
                                 "12122",  //
                                 "11122",  //
                                 "33122"});
  // The lone 2 goes; at (0, 3) two 1 and two 3: it stays 3, and so does (1, 3) no longer: of its
  // six pixels four are 1.
  const std::vector<std::string> expected{"11122",  //
                                          "11122",  //
                                          "11122",  //
                                          "31122"};
  CHECK(rows_of(majority_labels(labels.view(), 3)) == expected);
}

TEST_CASE("components smaller than their class's least area go to their neighbours") {
  const auto labels = labels_of({"1111111",  //
                                 "1211331",  //
                                 "1121331",  //
                                 "1111111",  //
                                 "2222222"});
  // The two 2s touch by a corner and are one component of two pixels.
  const std::vector<std::string> without_two{"1111111", "1111331", "1111331", "1111111", "2222222"};
  CHECK(rows_of(without_specks(labels.view(), {0, 2.5, 4})) == without_two);
  const std::vector<std::string> without_three{"1111111", "1211111", "1121111", "1111111",
                                               "2222222"};
  CHECK(rows_of(without_specks(labels.view(), {0, 2, 4.5})) == without_three);
  CHECK(rows_of(without_specks(labels.view(), {100, 0, 0}))[3] == "2222222");
  const auto alone = labels_of({"11", "11"});
  CHECK(rows_of(without_specks(alone.view(), {100, 100})) == rows_of(alone));
}

TEST_CASE("a clear component differs by five standard errors from the nearest class") {
  // Classes at 0, 2 and 6 with sd 1, 1 and 2: (5 * 1 / 2)^2, (5 * 1 / 2)^2, (5 * 2 / 4)^2.
  const std::vector<double> area = least_clear_areas({0, 2, 6}, {1, 1, 2});
  CHECK(area[0] == Approx(6.25));
  CHECK(area[1] == Approx(6.25));
  CHECK(area[2] == Approx(6.25));
}

TEST_CASE("the edge leak of a known profile") {
  // Columns 0..9 of class 1 at 0 and 10..19 of class 2 at 4; the pixels beside the border have lost
  // 30 % of the contrast, the next ones 10 %: the mean is 20 %.
  Volume<std::uint8_t> labels({20, 20});
  Volume<float> grey({20, 20});
  for (int y = 0; y < 20; ++y) {
    for (int x = 0; x < 20; ++x) {
      labels.at(x, y) = x < 10 ? 1 : 2;
      const int distance = x < 10 ? 10 - x : x - 9;
      const float lost = distance == 1 ? 0.3F : distance == 2 ? 0.1F : 0.0F;
      grey.at(x, y) = 4 * (x < 10 ? lost : 1 - lost);
    }
  }
  CHECK(edge_leak(grey.view(), labels.view(), 2) == Approx(0.2).epsilon(1e-6));
  for (int y = 0; y < 20; ++y) std::fill_n(labels.row(y), 20, std::uint8_t{1});
  CHECK(edge_leak(grey.view(), labels.view(), 2) == 0);
}

TEST_CASE("one particle more or less changes what it can change") {
  // Squares of side 2, 2 and 4 in class 2. Left out in turn, the mean area 8 becomes 10, 10 and 4
  // (equal boxes weigh the same; the weights of the large one differ and are taken from the list).
  Volume<std::uint8_t> labels({40, 40});
  for (int y = 0; y < 40; ++y) std::fill_n(labels.row(y), 40, std::uint8_t{1});
  const auto square = [&](int left, int top, int side) {
    for (int y = top; y < top + side; ++y) std::fill_n(labels.row(y) + left, side, std::uint8_t{2});
  };
  square(5, 5, 2);
  square(15, 5, 2);
  square(25, 25, 4);
  LabelMeasureSettings settings;
  const std::vector<MeasureKey> keys = measure_keys(settings);
  const std::vector<double> variance = one_particle_variances(labels.view(), {}, settings, {3, 3});
  const std::vector<Particle> list = find_particles(labels.view(), 2, {}, settings.particles).list;
  REQUIRE(list.size() == 3);
  const double w = list[0].weight, v = list[2].weight;
  const double mean = (2 * w * 4 + v * 16) / (2 * w + v);
  const double less_small = (w * 4 + v * 16) / (w + v);
  const double weight = (2 * w + v) / 3;  // of one more, of 3 pixels
  const double more = (2 * w * 4 + v * 16 + weight * 3) / (4 * weight);
  const double d4 = std::sqrt(16 / 3.141592653589793), d16 = 2 * d4;
  // The median is that of a small square; without one of them the large one holds more weight than
  // half; without the large one, or with one more small one, nothing changes.
  REQUIRE(v > w);
  for (std::size_t i = 0; i < keys.size(); ++i) {
    CAPTURE(keys[i].name, keys[i].label);
    if (keys[i].label == 1) continue;
    if (keys[i].name == "particle_count") {
      // Both small squares are below twice 3 pixels.
      CHECK(variance[i] == Approx(weight * (weight / 4 + 2 * w)));
    } else if (keys[i].name == "mean_particle_area") {
      const double out = (2 * std::pow(less_small - mean, 2) + std::pow(4 - mean, 2)) / 3;
      CHECK(variance[i] == Approx((out + std::pow(more - mean, 2)) / 2));
    } else if (keys[i].name == "d50") {
      CHECK(variance[i] == Approx(2 * std::pow(d16 - d4, 2) / 6));
    } else if (keys[i].name == "area_fraction") {
      CHECK(variance[i] == 0);
    }
  }
}
