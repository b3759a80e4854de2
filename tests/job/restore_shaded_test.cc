// Uneven light, from image to sample, against scenes whose light and labels are known; and light
// that was photographed. The bounds on light and labels are the project's targets; the large study
// is tests/study/study_shading.cc.
#include "job/restore_shaded.h"

#include <catch2/catch.hpp>
#include <cstring>

#include "core/error.h"
#include "image/temp_folder.h"
#include "image/write.h"
#include "job/light_files.h"
#include "study/lit_scenes.h"

using namespace stillfield;
using namespace stillfield::study;
using Catch::Matchers::Contains;
using stillfield::test::TempFolder;

namespace {

constexpr int kSide = 64;

struct Result {
  Volume<std::uint8_t> labels;
  Volume<float> light;
  ShadingFacts facts;
};

Result analyse(const Volume<float>& image, ShadingSettings shading, int threads) {
  SegmentSettings settings;
  settings.shading = shading;
  settings.schedule.max_sweeps = 600;
  const GreyLevels grey = make_grey_levels(image.view());
  const Pool pool(threads);
  JobObserver observer;
  UnevenLight light(shading, grey, image.view(), settings.classes);
  const LabelSampling run = light.restore(settings, 5, pool, observer);
  Result result{run.counts->most_probable(), {}, light.facts()};
  if (!light.modelled()) return result;
  result.light = Volume<float>(image.extent());
  for (int y = 0; y < kSide; ++y) {
    std::copy_n(light.surface().row(y), kSide, result.light.row(y));
  }
  return result;
}

Field field_of(float value) {
  Field field;
  field.pixels = Volume<float>({4, 3});
  for (int y = 0; y < 3; ++y) std::fill_n(field.pixels.row(y), 4, value);
  return field;
}

}  // namespace

TEST_CASE("light is recovered and labels are as good as under even light") {
  const auto truth = draw_lit_scene(LitScene::kBlobs, kSide, false, 12);
  const auto uneven = draw_light(Light::kVignette, kSide, 0.3, 12);
  const auto even = draw_light(Light::kVignette, kSide, 0, 12);
  // Half of the contrast: less noise leaves too few wrong pixels for a ratio.
  const auto image = photograph_lit(truth, uneven, 25, 12);
  const Result found = analyse(image, {ShadingMode::kAuto, 0}, 1);
  REQUIRE(found.facts.modelled);
  CHECK(light_error(found.light, uneven) < 0.03);
  CHECK(found.facts.mean_sd < 0.03);
  const Result plain = analyse(photograph_lit(truth, even, 25, 12), {}, 1);
  const Result ignored = analyse(image, {}, 1);
  CHECK(misclassified(found.labels, truth) <= 1.2 * misclassified(plain.labels, truth) + 1e-9);
  CHECK(misclassified(ignored.labels, truth) > 1.2 * misclassified(plain.labels, truth));

  const Result again = analyse(image, {ShadingMode::kAuto, 0}, 3);
  for (int y = 0; y < kSide; ++y) {
    REQUIRE(std::memcmp(again.labels.row(y), found.labels.row(y), kSide) == 0);
    REQUIRE(std::memcmp(again.light.row(y), found.light.row(y), kSide * sizeof(float)) == 0);
  }
}

// The first fit of so small an image spans more than --shading auto leaves alone.
TEST_CASE("even light is found even where it is modelled") {
  const auto truth = draw_lit_scene(LitScene::kBlobs, kSide, false, 13);
  const auto even = draw_light(Light::kSlope, kSide, 0, 13);
  const auto image = photograph_lit(truth, even, 25, 13);
  const Result found = analyse(image, {ShadingMode::kGiven, 6}, 1);
  REQUIRE(found.facts.modelled);
  CHECK(light_error(found.light, even) < 0.03);
  const Result plain = analyse(image, {}, 1);
  CHECK_FALSE(plain.facts.modelled);
  CHECK(misclassified(found.labels, truth) <= 1.2 * misclassified(plain.labels, truth));
}

TEST_CASE("photographed light is taken off, and what does not fit is refused in one sentence") {
  const TempFolder folder;
  Field flat = field_of(110), dark = field_of(10);
  flat.pixels.at(0, 0) = 60;  // half the light; the mean above the background is 575 / 6
  write_tiff(folder.path() / "flat.tif", flat.pixels.view(), {});
  write_tiff(folder.path() / "dark.tif", dark.pixels.view(), {});
  write_tiff(folder.path() / "small.tif", Volume<float>({2, 2}).view(), {});
  LightFiles files{folder.path() / "flat.tif", folder.path() / "dark.tif", {}, {}};
  digest_light_files(files);
  CHECK(files.flat_field_sha256.size() == 64);
  Field image = field_of(210);
  image.colour.push_back(field_of(20).pixels);
  correct_light(files, {}, image);
  CHECK(image.pixels.at(0, 0) == Approx(200 / 50.0 * 575 / 6));
  CHECK(image.pixels.at(3, 2) == Approx(200 / 100.0 * 575 / 6));
  CHECK(image.colour[0].at(3, 2) == Approx(10 / 100.0 * 575 / 6));
  CHECK(image.notes.size() == 1);

  files.flat_field = folder.path() / "small.tif";
  CHECK_THROWS_WITH(correct_light(files, {}, image), Contains("2 x 2 pixels and the image 4 x 3"));
  files.flat_field = folder.path() / "dark.tif";
  CHECK_THROWS_WITH(correct_light(files, {}, image), Contains("not above the background"));
  files.flat_field = folder.path() / "none.tif";
  CHECK_THROWS_WITH(digest_light_files(files), Contains("no such file for --flat-field"));
}
