// Bad input gets one sentence; good files beside it are done.
#include <unistd.h>

#include <algorithm>
#include <catch2/catch.hpp>
#include <limits>

#include "end_to_end/program.h"
#include "end_to_end/results.h"
#include "end_to_end/scene.h"

using namespace stillfield;
using namespace stillfield::test;
using Catch::Matchers::Contains;

namespace {

Volume<float> filled(int width, int height, float value) {
  Volume<float> picture(Extent{width, height});
  for (int y = 0; y < height; ++y) {
    for (int x = 0; x < width; ++x) picture.at(x, y) = value;
  }
  return picture;
}

std::size_t lines_in(const std::string& text) {
  return static_cast<std::size_t>(std::count(text.begin(), text.end(), '\n'));
}

// The one line on the error stream when `name` is the only input; nothing may be written for it.
std::string refusal(const TempFolder& folder, const std::string& name, int classes = 2) {
  const Ended ended = segment(folder / name, classes, folder / "out");
  CHECK(ended.code == 1);
  CHECK(lines_in(ended.err) == 1);
  CHECK_THAT(ended.err, Contains(name));
  if (fs::exists(folder / "out")) {
    for (const auto& entry : fs::directory_iterator(folder / "out")) {
      const std::string left = entry.path().filename().string();
      CHECK((left == "run.json" || left == "measurements.csv" || left == "summary.csv" ||
             left == "checks.csv" || left == "particles.csv"));
    }
  }
  return ended.err;
}

}  // namespace

TEST_CASE("an empty folder and a missing file are said to be so, and no output folder is made") {
  const TempFolder folder;
  fs::create_directory(folder / "empty");
  CHECK_THAT(refusal(folder, "empty"), Contains("no image in this folder"));
  CHECK_THAT(refusal(folder, "gone.png"), Contains("there is no such file"));
  CHECK_FALSE(fs::exists(folder / "out"));
}

TEST_CASE("a file that cannot be read") {
  const TempFolder folder;
  save_png(folder / "closed.png", draw_scene({}));
  fs::permissions(folder / "closed.png", fs::perms::none);
  if (::geteuid() != 0) {  // root may read everything
    CHECK_THAT(refusal(folder, "closed.png"), Contains("closed.png: "));
  }
  fs::create_directory(folder / "in");
  fs::create_symlink("nowhere.png", folder / "in/link.png");
  const Ended ended = segment(folder / "in", 2, folder / "out");
  CHECK(ended.code == 1);
  CHECK_THAT(ended.err, Contains("link.png"));
  CHECK(lines_in(ended.err) == 1);
}

TEST_CASE("truncated and empty files") {
  const TempFolder folder;
  save_png(folder / "cut.png", draw_scene({}));
  save_tiff16(folder / "cut.tif", draw_scene({}));
  for (const char* name : {"cut.png", "cut.tif"}) {
    fs::resize_file(folder / name, fs::file_size(folder / name) * 2 / 3);
    CHECK_THAT(refusal(folder, name), Contains(name));
  }
  put(folder / "nothing.png", "");
  CHECK_THAT(refusal(folder, "nothing.png"), Contains("empty"));
  put(folder / "text.png", "this is no picture");
  CHECK_THAT(refusal(folder, "text.png"), Contains("text.png"));
}

TEST_CASE("images without anything to tell apart") {
  const TempFolder folder;
  save_png(folder / "one.png", filled(1, 1, 7));
  CHECK_THAT(refusal(folder, "one.png"), Contains("same grey value"));
  save_png(folder / "constant.png", filled(40, 30, 99));
  CHECK_THAT(refusal(folder, "constant.png"), Contains("same grey value"));
  save_tiff_float(folder / "nan.tif", filled(40, 30, std::numeric_limits<float>::quiet_NaN()));
  CHECK_THAT(refusal(folder, "nan.tif"), Contains("nan.tif: "));
  Volume<float> two_levels = filled(40, 30, 10);
  two_levels.at(3, 4) = 200;
  save_png(folder / "two.png", two_levels);
  CHECK_THAT(refusal(folder, "two.png", 3), Contains("only 2 grey levels"));
}

TEST_CASE("a header that claims 100 000 x 100 000 pixels is refused before memory is asked for") {
  const TempFolder folder;
  put(folder / "huge.pgm", "P5 100000 100000 255\nabc");
  CHECK_THAT(refusal(folder, "huge.pgm"), Contains("huge.pgm"));
  save_png(folder / "a.png", draw_scene({}));
  const Ended ended = segment(folder / "a.png", 2, folder / "out", {"--max-pixels", "1000"});
  CHECK(ended.code == 1);
  CHECK_THAT(ended.err, Contains("a.png"));
}

TEST_CASE("narrow images, and missing pixels among good ones, are analysed") {
  const TempFolder folder;
  save_png(folder / "in/row.png", draw_scene({40, 1, 2, 5}));
  save_png(folder / "in/column.png", draw_scene({1, 40, 2, 6}));
  Volume<float> holes = draw_scene({40, 30, 2, 8});
  for (int x = 0; x < 20; ++x) holes.at(x, 3) = std::numeric_limits<float>::quiet_NaN();
  save_tiff_float(folder / "in/holes.tif", holes);
  const Ended ended =
      segment(folder / "in", 2, folder / "out", {"--max-sweeps", "600", "--threads", "2"});
  INFO(ended.err);
  CHECK(ended.code == 0);
  for (const char* name : {"row", "column", "holes"}) {
    CAPTURE(name);
    CHECK(result_files(folder / "out", name) == kResultSuffixes.size());
  }
  CHECK(read_json(folder / "out/holes.record.json")["grey_levels"]["missing_pixels"] == 20);
}

TEST_CASE("names with blanks, quotes, line breaks and other letters") {
  const TempFolder folder;
  const std::string names[] = {"two words",    "it's",
                               "say \"a\", b", "\xc3\xa4\xc3\xb6 \xe6\xa0\xb7",
                               "line\nbreak",  "caf\xe9"};
  for (const std::string& name : names) save_png(folder / "in" / (name + ".png"), draw_scene({}));
  const Ended ended = segment(folder / "in", 2, folder / "out");
  INFO(ended.err);
  CHECK(ended.code == 0);
  for (const std::string& name : names) {
    CAPTURE(name);
    CHECK(result_files(folder / "out", name) == kResultSuffixes.size());
  }
  CHECK_THAT(segment(folder / "in", 2, folder / "out").out, Contains("6 finished before"));
}

TEST_CASE("one bad file among good ones: the good ones are done, the exit code is 1") {
  const TempFolder folder;
  save_png(folder / "in/a.png", draw_scene({}));
  put(folder / "in/b.png", "broken");
  save_tiff16(folder / "in/c.tif", draw_scene({}));
  const Ended ended = segment(folder / "in", 2, folder / "out");
  CHECK(ended.code == 1);
  CHECK(lines_in(ended.err) == 1);
  CHECK_THAT(ended.err, Contains("b.png"));
  CHECK_THAT(ended.out, Contains("3 images: 2 done, 1 failed"));
  CHECK(result_files(folder / "out", "a") == kResultSuffixes.size());
  CHECK(result_files(folder / "out", "b") == 0);
  CHECK(result_files(folder / "out", "c") == kResultSuffixes.size());
  const auto run = read_json(folder / "out/run.json");
  CHECK(run["counts"]["failed"] == 1);
  CHECK(run["images"][1]["status"] == "failed");
  CHECK_THAT(run["images"][1]["sentence"].get<std::string>(), Contains("b.png"));
}

TEST_CASE("an output folder that cannot be: one sentence before any work") {
  const TempFolder folder;
  save_png(folder / "a.png", draw_scene({}));
  put(folder / "file", "x");
  const Ended in_file = segment(folder / "a.png", 2, folder / "file");
  CHECK(in_file.code == 2);
  CHECK_THAT(in_file.err, Contains("is a file"));
  const Ended in_proc = segment(folder / "a.png", 2, "/proc/results");
  CHECK(in_proc.code == 1);
  CHECK_THAT(in_proc.err, Contains("/proc/results: the output folder cannot be made"));
  CHECK(lines_in(in_proc.err) == 1);
  if (::geteuid() != 0) {
    fs::create_directory(folder / "closed");
    fs::permissions(folder / "closed", fs::perms::owner_read | fs::perms::owner_exec);
    CHECK(segment(folder / "a.png", 2, folder / "closed").code == 1);
    CHECK(segment(folder / "a.png", 2, folder / "closed/out").code == 1);
  }
}
