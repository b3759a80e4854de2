// The denoise command on small images: what it writes, in which types, and what it refuses.
#include <algorithm>
#include <catch2/catch.hpp>
#include <cmath>
#include <limits>

#include "end_to_end/program.h"
#include "end_to_end/results.h"
#include "end_to_end/scene.h"
#include "image/read.h"
#include "image/write.h"
#include "model/correlated_noise.h"
#include "random/stream.h"

using namespace stillfield;
using namespace stillfield::test;
using Catch::Matchers::Contains;

namespace {

Ended denoise(const fs::path& input, const fs::path& out, const Arguments& more = {}) {
  Arguments arguments = {"denoise", input.string(), "--out", out.string(), "--quick"};
  arguments.insert(arguments.end(), more.begin(), more.end());
  return run_program(arguments);
}

Scene without_noise(Scene scene) {
  scene.noise = 0;
  return scene;
}

double root_mean_square(const Volume<float>& a, const Volume<float>& b) {
  double sum = 0;
  for (int y = 0; y < a.height(); ++y) {
    for (int x = 0; x < a.width(); ++x) sum += std::pow(double{a.at(x, y)} - b.at(x, y), 2);
  }
  return std::sqrt(sum / static_cast<double>(a.extent().sites()));
}

Volume<float> pixels(const fs::path& file) {
  return read_page(file).pixels;
}

}  // namespace

TEST_CASE("a restored image is nearer to the truth, and its interval holds it") {
  const TempFolder folder;
  const Scene scene{128, 96, 3, 3, 60, 60, 20};
  save_tiff_float(folder / "in/a.tif", draw_scene(scene));
  const Ended ended = denoise(folder / "in", folder / "out", {"--noise", "gaussian:20"});
  INFO(ended.err);
  REQUIRE(ended.code == 0);
  const Volume<float> truth = draw_scene(without_noise(scene));
  const Volume<float> restored = pixels(folder / "out/a.restored.tif");
  const double before = root_mean_square(draw_scene(scene), truth);
  CHECK(root_mean_square(restored, truth) < 0.45 * before);
  const Volume<float> lower = pixels(folder / "out/a.lower90.tif");
  const Volume<float> upper = pixels(folder / "out/a.upper90.tif");
  const Volume<float> sd = pixels(folder / "out/a.sd.tif");
  int inside = 0, ordered = 0;
  for (int y = 0; y < truth.height(); ++y) {
    for (int x = 0; x < truth.width(); ++x) {
      inside += lower.at(x, y) <= truth.at(x, y) && truth.at(x, y) <= upper.at(x, y);
      ordered += lower.at(x, y) <= restored.at(x, y) && restored.at(x, y) <= upper.at(x, y) &&
                 sd.at(x, y) > 0;
    }
  }
  const auto all = static_cast<double>(truth.extent().sites());
  CHECK(ordered == truth.extent().sites());
  CHECK(inside / all > 0.8);  // nominal .9; flat disks with sharp rims are hard on a short run
  const auto record = read_json(folder / "out/a.record.json");
  CHECK(record["command"] == "denoise");
  CHECK(record["restoration"]["prior"] == "patches");
  CHECK(record["restoration"]["channels"][0]["noise"]["sd"] == 20);
  CHECK(record["restoration"]["channels"][0]["noise"]["origin"] == "given");
  CHECK_THAT(denoise(folder / "in", folder / "out", {"--noise", "gaussian:20"}).out,
             Contains("1 finished before"));
}

TEST_CASE("integers stay integers of the same depth, floats floats; --depth float gives floats") {
  const TempFolder folder;
  save_png(folder / "in/eight.png", draw_scene({48, 40, 2, 1, 40, 120, 15}));
  save_tiff16(folder / "in/sixteen.tif", draw_scene({48, 40, 2, 2, 900, 40000, 3000}));
  save_tiff_float(folder / "in/float.tif", draw_scene({48, 40, 2, 3, -50, 100, 10}));
  REQUIRE(denoise(folder / "in", folder / "out").code == 0);
  CHECK(read_page(folder / "out/eight.restored.tif").format ==
        SampleFormat{SampleKind::kUnsigned, 8});
  CHECK(read_page(folder / "out/sixteen.restored.tif").format ==
        SampleFormat{SampleKind::kUnsigned, 16});
  const Field field = read_page(folder / "out/float.restored.tif");
  CHECK(field.format == SampleFormat{SampleKind::kFloat, 32});
  CHECK(read_page(folder / "out/eight.sd.tif").format == SampleFormat{SampleKind::kFloat, 32});
  REQUIRE(denoise(folder / "in/eight.png", folder / "floats", {"--depth", "float"}).code == 0);
  CHECK(read_page(folder / "floats/eight.restored.tif").format ==
        SampleFormat{SampleKind::kFloat, 32});
}

TEST_CASE("colour channels are restored one by one and written together") {
  const TempFolder folder;
  std::vector<Volume<std::uint8_t>> planes;
  for (std::uint32_t c = 0; c < 3; ++c) {
    const Volume<float> grey = draw_scene({48, 40, 2, c + 1, 60, 100, 5.0 + 10 * c});
    Volume<std::uint8_t> plane(grey.extent());
    for (int y = 0; y < grey.height(); ++y) {
      for (int x = 0; x < grey.width(); ++x) {
        plane.at(x, y) = static_cast<std::uint8_t>(std::fmin(std::fmax(grey.at(x, y), 0), 255));
      }
    }
    planes.push_back(std::move(plane));
  }
  fs::create_directory(folder / "in");
  write_png(folder / "in/c.png", {planes[0].view(), planes[1].view(), planes[2].view()});
  const Ended ended = denoise(folder / "in", folder / "out");
  INFO(ended.err);
  REQUIRE(ended.code == 0);
  const auto channels = read_json(folder / "out/c.record.json")["restoration"]["channels"];
  REQUIRE(channels.size() == 3);
  CHECK(channels[0]["channel"] == "red");
  CHECK(channels[0]["noise"]["middle_sd"] < channels[2]["noise"]["middle_sd"]);
  const Field restored = read_page(folder / "out/c.restored.tif", 0, {}, ColourMode::kSeparate);
  REQUIRE(restored.colour.size() == 3);
  CHECK(read_page(folder / "out/c.sd.tif").channels_in_file == 3);
}

TEST_CASE("missing and masked pixels are filled in, with a larger deviation") {
  const TempFolder folder;
  const Scene scene{64, 48, 2, 5, 300, 200, 15};
  Volume<float> picture = draw_scene(scene);
  for (int x = 20; x < 26; ++x) picture.at(x, 30) = std::numeric_limits<float>::quiet_NaN();
  save_tiff_float(folder / "in/a.tif", picture);
  Volume<float> mask(picture.extent());
  for (int y = 0; y < 48; ++y) {
    for (int x = 0; x < 64; ++x) mask.at(x, y) = x < 4 ? 0 : 255;
  }
  save_png(folder / "mask.png", mask);
  const Ended ended = denoise(folder / "in", folder / "out",
                              {"--mask", (folder / "mask.png").string(), "--noise", "gaussian:15"});
  INFO(ended.err);
  REQUIRE(ended.code == 0);
  const Volume<float> restored = pixels(folder / "out/a.restored.tif");
  const Volume<float> sd = pixels(folder / "out/a.sd.tif");
  double inside = 0, outside = 0;  // mean deviations of masked columns and of the rest
  for (int y = 0; y < 48; ++y) {
    for (int x = 0; x < 64; ++x) (x < 4 ? inside : outside) += sd.at(x, y);
  }
  CHECK(inside / (4 * 48) > 1.2 * outside / (60 * 48));
  for (int x = 20; x < 26; ++x) CHECK(std::isfinite(restored.at(x, 30)));
  const auto channel = read_json(folder / "out/a.record.json")["restoration"]["channels"][0];
  CHECK(channel["missing_pixels"] == 4 * 48 + 6);
}

TEST_CASE("impulses are found and written as a map; without impulses there is none") {
  const TempFolder folder;
  Volume<float> picture = draw_scene({96, 80, 2, 7, 80, 80, 10});
  for (int y = 2; y < 80; y += 5) {
    for (int x = 3; x < 96; x += 6) picture.at(x, y) = (x + y) % 2 == 0 ? 255.0F : 0.0F;
  }
  save_png(folder / "in/salt.png", picture);
  save_png(folder / "in/clean.png", draw_scene({96, 80, 2, 7, 80, 80, 10}));
  REQUIRE(denoise(folder / "in", folder / "out", {"--noise", "gaussian:10"}).code == 0);
  REQUIRE(fs::exists(folder / "out/salt.impulses.tif"));
  CHECK_FALSE(fs::exists(folder / "out/clean.impulses.tif"));
  const Volume<float> map = pixels(folder / "out/salt.impulses.tif");
  int found = 0, all = 0;
  for (int y = 2; y < 80; y += 5) {
    for (int x = 3; x < 96; x += 6, ++all) found += map.at(x, y) > 0.5F;
  }
  CHECK(found > 0.9 * all);
}

TEST_CASE("correlated noise is warned of, and modelled when asked for") {
  const TempFolder folder;
  const Scene scene{160, 144, 2, 3, 60, 120, 0};
  const Volume<float> truth = draw_scene(scene);
  RandomStream random({20261201, 9}, Purpose::kSimulation);
  const Volume<float> noise =
      stillfield::testing::moving_average_noise(truth.extent(), 0.9, random);
  Volume<float> picture(truth.extent());
  for (int y = 0; y < picture.height(); ++y) {
    for (int x = 0; x < picture.width(); ++x) {
      picture.at(x, y) = truth.at(x, y) + 20 * noise.at(x, y);
    }
  }
  save_tiff_float(folder / "in/a.tif", picture);
  const auto restore = [&](const std::string& name, const Arguments& arguments) {
    const Ended ended = denoise(folder / "in", folder / name, arguments);
    INFO(ended.err);
    REQUIRE(ended.code == 0);
    return read_json(folder / name / "a.record.json");
  };
  const auto white = restore("white", {"--noise", "gaussian:20"});
  const auto modelled =
      restore("modelled", {"--noise", "gaussian:20", "--noise-correlation", "estimate"});
  const auto unknown = restore("unknown", {"--noise-correlation", "estimate"});
  // rho(1, 0) = a / (1 + a^2), .497 for a = .9
  const auto& facts = modelled["restoration"]["channels"][0]["noise"];
  CHECK(facts["neighbour_correlation"].get<double>() == Approx(0.497).margin(0.15));
  CHECK(facts["correlation_p_value"].get<double>() < 0.001);
  CHECK_THAT(white["verdict"]["sentences"].dump(), Contains("noise is correlated"));
  CHECK_THAT(white["input"]["notes"].dump(), !Contains("correlated"));
  CHECK_THAT(modelled["verdict"]["sentences"].dump(), !Contains("noise is correlated"));
  CHECK_THAT(modelled["input"]["notes"].dump(), Contains("modelled"));
  CHECK_THAT(unknown["input"]["notes"].dump(), Contains("modelled"));
  CHECK_THAT(unknown["verdict"]["sentences"].dump(), Contains("level is estimated too low"));
  CHECK(root_mean_square(pixels(folder / "modelled/a.restored.tif"), truth) <
        0.85 * root_mean_square(pixels(folder / "white/a.restored.tif"), truth));
}

TEST_CASE("white noise is restored as such, with a note") {
  const TempFolder folder;
  const Arguments more = {"--noise", "gaussian:15", "--noise-correlation", "estimate"};
  save_tiff_float(folder / "in/a.tif", draw_scene({96, 80, 2, 4}));
  REQUIRE(denoise(folder / "in", folder / "out", more).code == 0);
  const auto record = read_json(folder / "out/a.record.json");
  CHECK_THAT(record["input"]["notes"].dump(), Contains("no correlation of the noise was found"));
  REQUIRE(denoise(folder / "in", folder / "plain", {"--noise", "gaussian:15"}).code == 0);
  CHECK(root_mean_square(pixels(folder / "out/a.restored.tif"),
                         pixels(folder / "plain/a.restored.tif")) == 0);
}

TEST_CASE("what cannot be restored is said in one sentence") {
  const TempFolder folder;
  const auto refusal = [&](const std::string& name, const Arguments& more, int code) {
    const Ended ended = denoise(folder / name, folder / "out", more);
    CHECK(ended.code == code);
    CHECK(std::count(ended.err.begin(), ended.err.end(), '\n') <= 2);
    return ended.err;
  };
  Volume<float> flat({40, 30});
  save_png(folder / "constant.png", flat);
  CHECK_THAT(refusal("constant.png", {}, 1),
             Contains("constant.png") && Contains("same grey value"));
  save_png(folder / "a.png", draw_scene({}));
  save_png(folder / "none.png", Volume<float>({64, 48}));
  CHECK_THAT(refusal("a.png", {"--mask", (folder / "none.png").string()}, 1),
             Contains("a.png") && Contains("no usable pixel"));
  save_png(folder / "small.png", Volume<float>({6, 4}));
  CHECK_THAT(refusal("a.png", {"--mask", (folder / "small.png").string()}, 1),
             Contains("same size"));
  CHECK_THAT(refusal("a.png", {"--mask", (folder / "gone.png").string()}, 1),
             Contains("no such mask"));
  CHECK_THAT(refusal("a.png", {"--noise", "gaussian:0"}, 2),
             Contains("--noise") && Contains("above 0"));
  CHECK_THAT(refusal("a.png", {"--noise", "gaussian:-3"}, 2), Contains("above 0"));
  CHECK_THAT(refusal("a.png", {"--noise", "pink"}, 2), Contains("must be auto"));
  CHECK_THAT(refusal("a.png", {"--camera", (folder / "gone.json").string()}, 1),
             Contains("gone.json"));
}

TEST_CASE("an image too small for patches is restored by another field, with a note") {
  const TempFolder folder;
  save_png(folder / "in/tiny.png", draw_scene({5, 4, 2, 1, 60, 100, 20}));
  save_png(folder / "in/row.png", draw_scene({40, 1, 2, 1, 60, 100, 20}));
  const Ended ended = denoise(folder / "in", folder / "out", {"--noise", "gaussian:20"});
  INFO(ended.err);
  REQUIRE(ended.code == 0);
  const auto record = read_json(folder / "out/tiny.record.json");
  CHECK(record["restoration"]["prior"] == "edges");
  CHECK_THAT(record["input"]["notes"].dump(), Contains("too small for patches"));
}

TEST_CASE("a recheck scales the deviations, samples and a mixture from like images are used") {
  const TempFolder folder;
  save_tiff_float(folder / "in/a.tif", draw_scene({64, 48, 2, 3, 60, 100, 20}));
  save_tiff_float(folder / "like/b.tif", draw_scene({96, 80, 2, 9, 60, 100, 20}));
  const Ended ended = denoise(folder / "in", folder / "out",
                              {"--recheck", "--samples", "3", "--learn-from",
                               (folder / "like").string(), "--noise", "gaussian:20"});
  INFO(ended.err);
  REQUIRE(ended.code == 0);
  const auto channel = read_json(folder / "out/a.record.json")["restoration"]["channels"][0];
  CHECK(channel["sd_factor"].get<double>() > 0.5);
  CHECK(channel["sd_factor"].get<double>() < 2.0);
  CHECK(channel["sd_factor"] != 1.0);
  CHECK(count_pages(folder / "out/a.draws.tif") == 3);
  REQUIRE(denoise(folder / "in", folder / "alone", {"--noise", "gaussian:20"}).code == 0);
  CHECK(get(folder / "alone/a.restored.tif") != get(folder / "out/a.restored.tif"));
}

TEST_CASE("results of another command are not mixed into a folder") {
  const TempFolder folder;
  save_png(folder / "in/a.png", draw_scene({}));
  REQUIRE(denoise(folder / "in", folder / "out").code == 0);
  const Ended ended = segment(folder / "in", 2, folder / "out");
  CHECK(ended.code == 2);
  CHECK_THAT(ended.err, Contains("holds the results of `denoise`"));
}
