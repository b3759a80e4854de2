// The same bytes for every number of threads, CPU target and compiler.
#include <catch2/catch.hpp>

#include "end_to_end/program.h"
#include "end_to_end/results.h"
#include "end_to_end/scene.h"

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

void check_same_bytes(int classes, const Arguments& model) {
  const TempFolder folder;
  save_images(folder / "in", classes);
  int number = 0;
  const auto run = [&](Arguments more, const fs::path& program) {
    const fs::path out = folder / ("out-" + std::to_string(number++));
    more.insert(more.end(), model.begin(), model.end());
    const Ended ended = segment(folder / "in", classes, out, more, program);
    INFO(ended.err);
    REQUIRE(ended.code == 0);
    return results_in(out);
  };
  const Tree expected = run({"--threads", "1"}, STILLFIELD_PROGRAM);
  REQUIRE(expected.size() == 5 * (classes == 3 ? 3 : 2) + 2);
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
    // The large image takes long: of the other builds, their best target only.
    if (classes == 3 && program != STILLFIELD_PROGRAM) targets.resize(1);
    for (const std::string& target : targets) {
      CAPTURE(program, target);
      CHECK(differences(expected, run({"--cpu-target", target, "--threads", "2"}, program)) == "");
    }
  }
}

}  // namespace

TEST_CASE("two classes: same bytes everywhere") {
  check_same_bytes(2, {});
}

TEST_CASE("three classes, rows and chains in parallel: same bytes everywhere") {
  check_same_bytes(3, {});
}

TEST_CASE("five classes, eight neighbours, shared variance: same bytes everywhere") {
  check_same_bytes(5, {"--neighbours", "8", "--variance", "shared"});
}

TEST_CASE("the coupling drawn by path sampling: same bytes everywhere") {
  check_same_bytes(2, {"--coupling", "sampled", "--max-sweeps", "600"});
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
