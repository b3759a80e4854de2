// A finished image is done again only when its input, settings or files changed.
#include <catch2/catch.hpp>

#include "end_to_end/program.h"
#include "end_to_end/results.h"
#include "end_to_end/scene.h"

using namespace stillfield::test;
using Catch::Matchers::Contains;

namespace {

std::map<std::string, fs::file_time_type> times_in(const fs::path& folder) {
  std::map<std::string, fs::file_time_type> times;
  for (const auto& entry : fs::recursive_directory_iterator(folder)) {
    const std::string name = entry.path().lexically_relative(folder).generic_string();
    if (entry.is_regular_file() && name != "run.json") times[name] = entry.last_write_time();
  }
  return times;
}

}  // namespace

TEST_CASE("a second run skips everything and leaves bytes and times alone") {
  const TempFolder folder;
  save_png(folder / "in/a.png", draw_scene({}));
  save_tiff16(folder / "in/sub/b.tif", draw_scene({48, 40, 2, 2}));
  CHECK_THAT(segment(folder / "in", 2, folder / "out").out, Contains("2 images: 2 done."));
  const Tree tree = results_in(folder / "out");
  const auto times = times_in(folder / "out");

  CHECK_THAT(segment(folder / "in", 2, folder / "out").out, Contains("0 done, 2 finished before"));
  CHECK(differences(tree, results_in(folder / "out")) == "");
  CHECK(times_in(folder / "out") == times);

  SECTION("--redo does everything again, to the same bytes") {
    CHECK_THAT(segment(folder / "in", 2, folder / "out", {"--redo"}).out, Contains("2 done."));
    CHECK(differences(tree, results_in(folder / "out")) == "");
    CHECK(times_in(folder / "out").at("a.record.json") > times.at("a.record.json"));
  }
  SECTION("threads and CPU target do not count as a change") {
    CHECK_THAT(segment(folder / "in", 2, folder / "out", {"--threads", "3"}).out,
               Contains("2 finished before"));
  }
  SECTION("another setting does") {
    CHECK_THAT(segment(folder / "in", 2, folder / "out", {"--seed", "9"}).out, Contains("2 done."));
    CHECK_THAT(segment(folder / "in", 3, folder / "out").out, Contains("2 done."));
  }
  SECTION("a changed input does, and its neighbour is left alone") {
    save_png(folder / "in/a.png", draw_scene({64, 48, 2, 77}));
    CHECK_THAT(segment(folder / "in", 2, folder / "out").out,
               Contains("1 done, 1 finished before"));
    CHECK(times_in(folder / "out").at("sub/b.record.json") == times.at("sub/b.record.json"));
  }
  SECTION("a lost or cut file and a damaged record do") {
    fs::remove(folder / "out/a.entropy.tif");
    put(folder / "out/sub/b.record.json", "{");
    CHECK_THAT(segment(folder / "in", 2, folder / "out").out, Contains("2 done."));
    CHECK(differences(tree, results_in(folder / "out")) == "");
  }
}
