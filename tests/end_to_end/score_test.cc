// `score`: results of segment and denoise against the scene they were made from.
#include <catch2/catch.hpp>
#include <cmath>

#include "end_to_end/program.h"
#include "end_to_end/results.h"
#include "end_to_end/scene.h"
#include "image/write.h"

using namespace stillfield;
using namespace stillfield::test;
using Catch::Matchers::Contains;

namespace {

constexpr Scene kScene{96, 80, 2, 4, 60, 100, 20};

Volume<float> clean_scene() {
  Scene scene = kScene;
  scene.noise = 0;
  return draw_scene(scene);
}

double value_of(const nlohmann::ordered_json& image, const std::string& score, int label = 0) {
  for (const auto& v : image["scores"]) {
    if (v["score"] == score && v["class"] == label) return v["value"].get<double>();
  }
  FAIL("no score " << score);
  return 0;
}

}  // namespace

TEST_CASE("labels are scored against a truth of another format") {
  const TempFolder folder;
  save_png(folder / "in/heat/a.png", draw_scene(kScene));
  const Volume<float> clean = clean_scene();
  Volume<std::uint8_t> truth(clean.extent());
  for (int y = 0; y < truth.height(); ++y) {
    for (int x = 0; x < truth.width(); ++x) truth.at(x, y) = clean.at(x, y) > 100 ? 2 : 1;
  }
  fs::create_directories(folder / "truth/heat");
  write_tiff(folder / "truth/heat/a.tif", truth.view());
  REQUIRE(segment(folder / "in", 2, folder / "out").code == 0);
  const Ended ended =
      run_program({"score", (folder / "out").string(), "--truth", (folder / "truth").string()});
  INFO(ended.err);
  REQUIRE(ended.code == 0);
  CHECK_THAT(ended.out, Contains("1 scored, 0 failed"));
  const auto image = read_json(folder / "out/score.json")["images"][0];
  CHECK(image["image"] == "heat/a.png");
  CHECK(value_of(image, "misclassified") < 0.02);
  CHECK(value_of(image, "dice", 2) > 0.95);
  CHECK(value_of(image, "brier") < 0.05);
  CHECK(std::abs(value_of(image, "area_fraction_error", 2)) < 0.02);
  CHECK(image["confusion"].size() == 4);
  CHECK(image["reliability"].size() == 10);
  CHECK_THAT(get(folder / "out/score.csv"), Contains("heat/a.png,1,0,misclassified,"));
}

TEST_CASE("intensities are scored, and an image without truth is named") {
  const TempFolder folder;
  save_tiff_float(folder / "in/a.tif", draw_scene(kScene));
  save_tiff_float(folder / "in/b.tif", draw_scene(kScene));
  save_tiff_float(folder / "truth/a.tif", clean_scene());
  REQUIRE(run_program({"denoise", (folder / "in").string(), "--out", (folder / "out").string(),
                       "--quick", "--noise", "gaussian:20"})
              .code == 0);
  const Ended ended = run_program({"score", (folder / "out").string(), "--truth",
                                   (folder / "truth").string(), "--peak", "255"});
  CHECK(ended.code == 1);
  CHECK_THAT(ended.err, Contains("b.tif: there is no truth for this image"));
  const auto image = read_json(folder / "out/score.json")["images"][0];
  CHECK(value_of(image, "psnr") > 28);  // 22 before
  CHECK(value_of(image, "coverage90") > 0.75);
  CHECK(std::abs(value_of(image, "mean_error")) < 2);
}

TEST_CASE("folders that cannot be scored") {
  const TempFolder folder;
  fs::create_directory(folder / "empty");
  const auto refusal = [&](const fs::path& results, const fs::path& truth) {
    const Ended ended = run_program({"score", results.string(), "--truth", truth.string()});
    CHECK(ended.code == 1);
    return ended.err;
  };
  CHECK_THAT(refusal(folder / "gone", folder / "empty"), Contains("there is no such folder"));
  CHECK_THAT(refusal(folder / "empty", folder / "gone"), Contains("there is no such folder"));
  CHECK_THAT(refusal(folder / "empty", folder / "empty"), Contains("holds no record"));
}
