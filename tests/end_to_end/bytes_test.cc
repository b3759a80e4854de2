// The same bytes for every number of threads, CPU target and compiler.
#include <catch2/catch.hpp>
#include <functional>
#include <limits>

#include "end_to_end/program.h"
#include "end_to_end/results.h"
#include "end_to_end/scene.h"

using namespace stillfield;
using namespace stillfield::test;

namespace {

// Images below 320 x 320 pixels run chains side by side, larger ones rows: both must be seen.
void save_images(const fs::path& folder, int classes) {
  const double step = 160.0 / (classes - 1);
  save_png(folder / "grey8.png", draw_scene({64, 48, classes, 1, 40, step, step / 4}));
  save_tiff16(folder / "deep/grey16.tif",
              draw_scene({81, 57, classes, 2, 900, 11 * step, 4 * step}));
  if (classes == 3) {
    save_tiff16(folder / "large.tif", draw_scene({340, 330, classes, 3, 400, 300, 110}));
  }
}

Volume<float> scene_with_holes() {
  Volume<float> picture = draw_scene({53, 41, 2, 4, 300, 200, 40});
  for (int x = 5; x < 25; ++x) picture.at(x, 7) = std::numeric_limits<float>::quiet_NaN();
  return picture;
}

// `command` and its options without INPUT and --out. `heavy`: of other builds, their best target
// only.
void check_same_bytes(const Arguments& command, const std::function<void(const fs::path&)>& save,
                      std::size_t files, bool heavy = false) {
  const TempFolder folder;
  save(folder / "in");
  int number = 0;
  const auto run = [&](const Arguments& more, const fs::path& program) {
    const fs::path out = folder / ("out-" + std::to_string(number++));
    Arguments arguments = command;
    arguments.insert(arguments.end(), {(folder / "in").string(), "--out", out.string()});
    arguments.insert(arguments.end(), more.begin(), more.end());
    const Ended ended = run_program(arguments, program);
    INFO(ended.err);
    REQUIRE(ended.code == 0);
    return results_in(out);
  };
  const Tree expected = run({"--threads", "1"}, STILLFIELD_PROGRAM);
  REQUIRE(expected.size() == files);
  for (const char* threads : {"2", "4"}) {
    CAPTURE(threads);
    CHECK(differences(expected, run({"--threads", threads}, STILLFIELD_PROGRAM)) == "");
  }
  std::vector<fs::path> programs = {STILLFIELD_PROGRAM};
  for (const fs::path& other : other_programs()) programs.push_back(other);
  if (programs.size() == 1) WARN("STILLFIELD_OTHER_PROGRAMS is empty: one build compared");
  for (const fs::path& program : programs) {
    std::vector<std::string> targets = listed_cpu_targets(program);
    REQUIRE_FALSE(targets.empty());
    if (heavy && program != STILLFIELD_PROGRAM) targets.resize(1);
    for (const std::string& target : targets) {
      CAPTURE(program, target);
      CHECK(differences(expected, run({"--cpu-target", target, "--threads", "2"}, program)) == "");
    }
  }
}

void check_labels(int classes, const Arguments& model) {
  Arguments command = {"segment", "--classes", std::to_string(classes), "--quick"};
  command.insert(command.end(), model.begin(), model.end());
  const auto save = [classes](const fs::path& in) { save_images(in, classes); };
  check_same_bytes(command, save, 6 * (classes == 3 ? 3 : 2) + 4, classes == 3);
}

}  // namespace

TEST_CASE("two classes: same bytes everywhere") {
  check_labels(2, {});
}

TEST_CASE("three classes, rows and chains in parallel: same bytes everywhere") {
  // Few replicates: the large image would take most of the time of all tests.
  check_labels(3, {"--replicates", "6"});
}

TEST_CASE("five classes, eight neighbours, shared variance: same bytes everywhere") {
  check_labels(5, {"--neighbours", "8", "--variance", "shared"});
}

TEST_CASE("the coupling drawn by path sampling: same bytes everywhere") {
  check_labels(2, {"--coupling", "sampled", "--max-sweeps", "600"});
}

TEST_CASE("labels seen through blur: same bytes everywhere") {
  check_labels(2, {"--blur", "0.8", "--max-sweeps", "600"});
}

TEST_CASE("restored intensities, every prior and kind of noise: same bytes everywhere") {
  const auto save = [](const fs::path& in) {
    save_png(in / "grey8.png", draw_scene({64, 48, 3, 1, 40, 60, 15}));
    save_tiff_float(in / "deep/holes.tif", scene_with_holes());
  };
  const Arguments commands[] = {
      {"denoise", "--samples", "2"},
      {"denoise", "--noise", "photon:0.5,60", "--recheck", "--quick"},
      {"denoise", "--noise", "rician:12", "--quick"},
      {"denoise", "--prior", "edges", "--max-sweeps", "600"},
      {"denoise", "--prior", "smooth", "--max-sweeps", "600", "--neighbours", "8"}};
  for (const Arguments& command : commands) {
    CAPTURE(command);
    const bool draws = command[1] == "--samples";
    check_same_bytes(command, save, 2 * (draws ? 7 : 6) + 2);
  }
}

TEST_CASE("a region of interest, and particles by other rules: same bytes everywhere") {
  const TempFolder masks;
  Volume<float> mask({64, 48});
  for (int y = 4; y < 40; ++y) {
    for (int x = 6; x < 60; ++x) mask.at(x, y) = (x * y) % 97 != 0;
  }
  save_png(masks / "mask.png", mask);
  const auto save = [](const fs::path& in) {
    save_png(in / "grey8.png", draw_scene({64, 48, 2, 1, 60, 80, 25}));
  };
  check_same_bytes({"segment", "--classes", "2", "--quick", "--max-sweeps", "600", "--mask",
                    (masks / "mask.png").string(), "--min-area", "2", "--particle-neighbours", "4"},
                   save, 6 + 4);
}

TEST_CASE("another seed gives other bytes") {
  const TempFolder folder;
  save_images(folder / "in", 2);
  CHECK(segment(folder / "in", 2, folder / "a").code == 0);
  CHECK(segment(folder / "in", 2, folder / "b", {"--seed", "2"}).code == 0);
  CHECK(get(folder / "a/grey8.probability.tif") != get(folder / "b/grey8.probability.tif"));
}

TEST_CASE("the forced CPU target and the threads stand in the record") {
  const TempFolder folder;
  save_png(folder / "in/a.png", draw_scene({}));
  const std::string target = listed_cpu_targets().back();
  CHECK(
      segment(folder / "in", 2, folder / "out", {"--cpu-target", target, "--threads", "3"}).code ==
      0);
  const auto run = read_json(folder / "out/a.record.json")["run"];
  CHECK(run["cpu_target"] == target);
  CHECK(run["threads"] == 3);
}
