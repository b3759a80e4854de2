// The table of particles, regions of interest and units, through the program.
#include <catch2/catch.hpp>
#include <cmath>
#include <cstdlib>

#include "end_to_end/program.h"
#include "end_to_end/results.h"
#include "end_to_end/scene.h"
#include "image/read.h"
#include "report/csv_reader.h"

using namespace stillfield;
using namespace stillfield::test;
using Catch::Matchers::Contains;

namespace {

double number(const std::string& text) {
  return std::strtod(text.c_str(), nullptr);
}

const std::vector<std::string>& row_of(const CsvRows& rows, const std::string& name, int label) {
  for (const auto& row : rows) {
    if (row[3] == name && row[2] == std::to_string(label)) return row;
  }
  FAIL("no row " << name);
  return rows.front();
}

// 72 x 60 with two bright boxes, 12 x 10 and 6 x 6, and some noise.
Volume<float> two_boxes() {
  Volume<float> picture = draw_scene({72, 60, 2, 3, 100, 0, 8});
  for (int y = 0; y < 60; ++y) {
    for (int x = 0; x < 72; ++x) {
      const bool first = x >= 10 && x < 22 && y >= 8 && y < 18;
      const bool second = x >= 50 && x < 56 && y >= 40 && y < 46;
      if (first || second) picture.at(x, y) += 80;
    }
  }
  return picture;
}

}  // namespace

TEST_CASE("particles of a plain scene: positions, sizes in micrometres, and certainty") {
  const TempFolder folder;
  save_png(folder / "in/a.png", two_boxes());
  REQUIRE(segment(folder / "in", 2, folder / "out", {"--pixel-size", "500nm"}).code == 0);
  const CsvRows rows = read_csv(get(folder / "out/particles.csv"));
  REQUIRE(rows.size() == 1 + 2);
  CHECK(get(folder / "out/particles.csv") == get(folder / "out/a.particles.csv"));
  REQUIRE(rows[0].size() == 16);
  const auto& first = rows[1];
  CHECK((first[0] == "a.png" && first[2] == "2" && first[3] == "1"));
  CHECK(number(first[4]) == Approx(15.5));
  CHECK(number(first[5]) == Approx(12.5));
  CHECK(first[6] == "um");
  CHECK(number(first[7]) == 120 * 0.25);
  CHECK(number(first[11]) == Approx(std::sqrt(4 * 30 / 3.14159265358979)));
  CHECK(number(first[12]) == Approx(180).margin(5));
  CHECK(number(first[13]) == 1);
  CHECK(first[14] == "0");
  CHECK(number(first[15]) == Approx(72.0 * 60 / ((72 - 12 - 1) * (60 - 10 - 1))));
  const CsvRows measured = read_csv(get(folder / "out/measurements.csv"));
  CHECK(row_of(measured, "d50", 2)[4] == "um");
  CHECK(row_of(measured, "mean_particle_area", 2)[4] == "um^2");
  CHECK(number(row_of(measured, "d90", 2)[5]) == Approx(number(first[11])).epsilon(0.02));
  CHECK(row_of(measured, "d50", 1)[15] == "0");  // the ground has no size: said, not invented
  CHECK(row_of(measured, "d50", 1)[5].empty());
  const Field labels = read_page(folder / "out/a.labels.tif");
  CHECK(labels.pixel_size_um.value_or(0) == Approx(0.5));
}

TEST_CASE("the smallest area and the rule of neighbours are kept") {
  const TempFolder folder;
  save_png(folder / "in/a.png", two_boxes());
  REQUIRE(segment(folder / "in", 2, folder / "out", {"--min-area", "50"}).code == 0);
  CHECK(read_csv(get(folder / "out/particles.csv")).size() == 1 + 1);
}

TEST_CASE("outside the mask nothing is seen, mapped or measured") {
  const TempFolder folder;
  save_png(folder / "in/a.png", two_boxes());
  Volume<float> mask({72, 60});
  for (int y = 0; y < 60; ++y) {
    for (int x = 0; x < 36; ++x) mask.at(x, y) = 1;
  }
  save_png(folder / "mask.png", mask);
  const Arguments masked = {"--mask", (folder / "mask.png").string(), "--max-sweeps", "600"};
  REQUIRE(segment(folder / "in", 2, folder / "out", masked).code == 0);
  const Field labels = read_page(folder / "out/a.labels.tif");
  const Field entropy = read_page(folder / "out/a.entropy.tif");
  const Field probability = read_page(folder / "out/a.probability.tif", 1);
  int wrong = 0;
  for (int y = 0; y < 60; ++y) {
    for (int x = 0; x < 72; ++x) {
      const bool outside = x >= 36;
      wrong += (labels.pixels.at(x, y) == 0) != outside;
      wrong += std::isnan(entropy.pixels.at(x, y)) != outside;
      wrong += std::isnan(probability.pixels.at(x, y)) != outside;
    }
  }
  CHECK(wrong == 0);
  CHECK(read_csv(get(folder / "out/particles.csv")).size() == 1 + 1);
  const CsvRows measured = read_csv(get(folder / "out/measurements.csv"));
  CHECK(number(row_of(measured, "area_fraction", 2)[5]) == Approx(120.0 / (36 * 60)).epsilon(0.02));
  CHECK(number(row_of(measured, "particle_count", 2)[5]) ==
        Approx(36.0 * 60 / ((36 - 12 - 1) * (60 - 10 - 1))).epsilon(0.05));

  SECTION("another content of the mask is another run") {
    CHECK_THAT(segment(folder / "in", 2, folder / "out", masked).out, Contains("finished before"));
    mask.at(0, 0) = 0;
    save_png(folder / "mask.png", mask);
    CHECK_THAT(segment(folder / "in", 2, folder / "out", masked).out, Contains("1 done."));
  }
  SECTION("masks that cannot be used get a sentence") {
    const auto refusal = [&](const fs::path& with) {
      const Ended ended = segment(folder / "in", 2, folder / "bad", {"--mask", with.string()});
      CHECK(ended.code == 1);
      return ended.err;
    };
    CHECK_THAT(refusal(folder / "gone.png"), Contains("there is no such mask"));
    save_png(folder / "small.png", Volume<float>({8, 8}));
    CHECK_THAT(refusal(folder / "small.png"), Contains("8 x 8") && Contains("72 x 60"));
    save_png(folder / "nothing.png", Volume<float>({72, 60}));
    CHECK_THAT(refusal(folder / "nothing.png"), Contains("0 everywhere"));
  }
}

TEST_CASE("the particles of a run are those of its images, also when it is resumed") {
  const TempFolder folder;
  save_png(folder / "in/a.png", two_boxes());
  save_png(folder / "in/sub/b, c.png", draw_scene({64, 48, 2, 4, 60, 80, 15}));
  REQUIRE(segment(folder / "in", 2, folder / "out").code == 0);
  const std::string before = get(folder / "out/particles.csv");
  CHECK_THAT(before, Contains("\"sub/b, c.png\""));
  fs::remove(folder / "out/particles.csv");
  CHECK_THAT(segment(folder / "in", 2, folder / "out").out, Contains("2 finished before"));
  CHECK(get(folder / "out/particles.csv") == before);
  fs::remove(folder / "out/a.particles.csv");
  CHECK_THAT(segment(folder / "in", 2, folder / "out").out, Contains("1 done, 1 finished before"));
  CHECK(get(folder / "out/particles.csv") == before);
}
