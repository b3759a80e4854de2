#include "job/output_folder.h"

#include <catch2/catch.hpp>
#include <chrono>

#include "image/temp_folder.h"

using namespace stillfield;
using namespace stillfield::test;
using Catch::Matchers::Contains;

TEST_CASE("the output folder is made, and probing it leaves nothing behind") {
  const TempFolder folder;
  prepare_output_folder(folder / "a/b");
  CHECK(fs::is_directory(folder / "a/b"));
  CHECK(fs::is_empty(folder / "a/b"));
  prepare_output_folder(folder / "a/b");
}

TEST_CASE("a file, a place below a file and a place that takes no folder are told apart") {
  const TempFolder folder;
  put(folder / "file", "x");
  CHECK_THAT(sentence_of(ErrorKind::kUsage, [&] { prepare_output_folder(folder / "file"); }),
             Contains("is a file"));
  CHECK_THAT(sentence_of(ErrorKind::kOutput, [&] { prepare_output_folder(folder / "file/out"); }),
             Contains("cannot be made"));
  CHECK_THAT(sentence_of(ErrorKind::kOutput, [] { prepare_output_folder("/proc/out"); }),
             Contains("/proc/out: the output folder cannot be made"));
}

TEST_CASE("a file with the same text is left alone") {
  const TempFolder folder;
  const fs::path file = folder / "t.csv";
  write_if_changed(file, "one\n");
  const auto long_ago = fs::last_write_time(file) - std::chrono::hours(1);
  fs::last_write_time(file, long_ago);
  write_if_changed(file, "one\n");
  CHECK(fs::last_write_time(file) == long_ago);
  write_if_changed(file, "two\n");
  CHECK(get(file) == "two\n");
}

TEST_CASE("suffixes come after every dot of the name") {
  CHECK(with_suffix("a.b/c.d", ".labels.tif") == fs::path("a.b/c.d.labels.tif"));
}
