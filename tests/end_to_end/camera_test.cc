// The camera command on simulated frames: EMVA 1288's linear model with known gain, offset, read
// noise and saturation; the model it writes serves denoise; bad frames are said to be so.
#include <catch2/catch.hpp>
#include <cmath>

#include "end_to_end/program.h"
#include "end_to_end/results.h"
#include "end_to_end/scene.h"
#include "random/stream.h"

using namespace stillfield;
using namespace stillfield::test;
using Catch::Matchers::Contains;

namespace {

constexpr double kGain = 2.5, kOffset = 100, kReadNoise = 6, kSaturation = 4095;

// One frame of a 12-bit camera with `electrons` a pixel.
Volume<float> frame(double electrons, std::uint32_t number, Extent extent = {96, 80}) {
  Volume<float> picture(extent);
  RandomStream random(chain_key(77, number), Purpose::kSimulation);
  for (int y = 0; y < extent.height; ++y) {
    for (int x = 0; x < extent.width; ++x) {
      const double grey = kOffset + kGain * static_cast<double>(random.poisson(electrons)) +
                          kReadNoise * random.normal();
      picture.at(x, y) =
          static_cast<float>(std::fmin(std::fmax(std::floor(grey + 0.5), 0.0), kSaturation));
    }
  }
  return picture;
}

void save_frames(const fs::path& folder, const std::vector<double>& levels) {
  std::uint32_t number = 0;
  for (int i = 0; i < 6; ++i) {
    save_tiff16(folder / "dark" / (std::to_string(i) + ".tif"), frame(0, number++));
  }
  for (const double electrons : levels) {
    for (int i = 0; i < 4; ++i) {
      save_tiff16(folder / "flat" / std::to_string(static_cast<int>(electrons)) /
                      (std::to_string(i) + ".tif"),
                  frame(electrons, number++));
    }
  }
}

Ended camera(const fs::path& folder) {
  return run_program({"camera", "--dark", (folder / "dark").string(), "--flat",
                      (folder / "flat").string(), "--out", (folder / "camera.json").string()});
}

}  // namespace

TEST_CASE("a simulated camera is recovered within 2 %, and serves denoise") {
  const TempFolder folder;
  save_frames(folder / "", {50, 150, 300, 600, 900, 1200, 2500});  // the last is saturated
  const Ended ended = camera(folder / "");
  INFO(ended.err);
  REQUIRE(ended.code == 0);
  CHECK_THAT(ended.out, Contains("gain"));
  const auto json = read_json(folder / "camera.json");
  CHECK(json["gain"].get<double>() == Approx(kGain).epsilon(0.02));
  CHECK(json["offset"].get<double>() == Approx(kOffset).epsilon(0.02));
  // What a frame shows holds the rounding to whole grey values: 1/12.
  CHECK(json["read_noise"].get<double>() ==
        Approx(std::sqrt(kReadNoise * kReadNoise + 1.0 / 12)).epsilon(0.02));
  CHECK(json["saturation"].get<double>() == Approx(kSaturation).epsilon(0.02));
  CHECK(json["linearity_residual_percent"].get<double>() < 1.0);
  CHECK(json["levels"].size() == 8);
  for (const char* name : {"camera.transfer.csv", "camera.offset.tif", "camera.hot-pixels.tif"}) {
    CHECK(fs::exists(folder / name));
  }
  save_tiff16(folder / "in/a.tif", frame(200, 500));
  const Ended restored =
      run_program({"denoise", (folder / "in").string(), "--out", (folder / "out").string(),
                   "--camera", (folder / "camera.json").string(), "--quick"});
  INFO(restored.err);
  REQUIRE(restored.code == 0);
  const auto noise = read_json(folder / "out/a.record.json")["restoration"]["channels"][0]["noise"];
  CHECK(noise["origin"] == "camera");
  CHECK(noise["kind"] == "photon");
  CHECK(noise["middle_sd"].get<double>() ==
        Approx(std::sqrt(kGain * kGain * 200 + kReadNoise * kReadNoise)).epsilon(0.03));
}

TEST_CASE("frames that cannot serve are said to be so in one sentence") {
  const auto refusal = [](const TempFolder& folder) {
    const Ended ended = camera(folder / "");
    CHECK(ended.code == 1);
    CHECK(std::count(ended.err.begin(), ended.err.end(), '\n') == 1);
    CHECK_FALSE(fs::exists(folder / "camera.json"));
    return ended.err;
  };
  {
    const TempFolder folder;
    save_tiff16(folder / "dark/a.tif", frame(0, 1));
    save_tiff16(folder / "flat/1/a.tif", frame(100, 2));
    CHECK_THAT(refusal(folder), Contains("dark"));
  }
  {
    const TempFolder folder;
    save_frames(folder / "", {100, 200});
    save_tiff16(folder / "flat/200/z.tif", frame(200, 3, {64, 64}));
    CHECK_THAT(refusal(folder), Contains("z.tif"));
  }
  {
    const TempFolder folder;
    save_frames(folder / "", {5000, 6000});
    CHECK_THAT(refusal(folder), Contains("saturated"));
  }
  {
    const TempFolder folder;
    save_frames(folder / "", {100});
    CHECK_THAT(refusal(folder), Contains("one level"));
  }
  {
    const TempFolder folder;
    fs::create_directory(folder / "dark");
    CHECK_THAT(refusal(folder), Contains("flat"));
  }
}
