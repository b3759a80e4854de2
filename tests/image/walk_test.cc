#include "image/walk.h"

#include <catch2/catch.hpp>

#include "temp_folder.h"

using namespace stillfield;
using namespace stillfield::test;
using Catch::Matchers::Contains;

namespace {

using Names = std::vector<std::string>;

Names relatives(const std::vector<InputFile>& files) {
  Names names;
  for (const auto& file : files) names.push_back(file.relative.generic_string());
  return names;
}

Names outputs(const std::vector<InputFile>& files) {
  Names names;
  for (const auto& file : files) names.push_back(file.output.generic_string());
  return names;
}

void touch(const TempFolder& folder, const Names& names) {
  for (const auto& name : names) put(folder / name, "x");
}

}  // namespace

TEST_CASE(
    "folders are walked in byte order and mirrored, other files and hidden ones are left out") {
  const TempFolder folder;
  touch(folder, {"b.png", "a/2.TIF", "a/10.jpeg", "a/\xc3\xa4.bmp", "Z.pgm", "notes.txt", "c.csv",
                 ".hidden.png", ".cache/x.png", "a/.x/y.png", "a.b/c.tiff", "noext"});
  const auto files = find_inputs({folder.path()}, "");
  CHECK(relatives(files) ==
        Names{"Z.pgm", "a.b/c.tiff", "a/10.jpeg", "a/2.TIF", "a/\xc3\xa4.bmp", "b.png"});
  CHECK(outputs(files) == Names{"Z", "a.b/c", "a/10", "a/2", "a/\xc3\xa4", "b"});
  for (const auto& file : files) CHECK(get(file.path) == "x");
}

TEST_CASE("the output folder inside an input is left out, as an input it is refused") {
  const TempFolder folder;
  touch(folder, {"a.png", "out/a.labels.tif", "out/in/b.png"});
  CHECK(relatives(find_inputs({folder.path()}, folder / "out")) == Names{"a.png"});
  CHECK(relatives(find_inputs({folder / "out/in"}, folder / "out")) == Names{"b.png"});
  CHECK_THAT(sentence_of(ErrorKind::kUsage, [&] { find_inputs({folder.path()}, folder.path()); }),
             Contains("both an input and the output folder"));
}

TEST_CASE("links that lead back end, other links are followed, duplicates count once") {
  const TempFolder folder;
  touch(folder, {"in/a.png", "in/sub/b.png", "elsewhere/c.png"});
  fs::create_directory_symlink(folder / "in", folder / "in/sub/loop");
  fs::create_directory_symlink("..", folder / "in/sub/up");
  fs::create_directory_symlink(folder / "elsewhere", folder / "in/link");
  fs::create_symlink(folder / "in/a.png", folder / "in/same.png");
  CHECK(relatives(find_inputs({folder / "in"}, "")) == Names{"a.png", "link/c.png", "sub/b.png"});
  const auto twice = find_inputs({folder / "in/a.png", folder / "in/./sub/../a.png"}, "");
  CHECK(relatives(twice) == Names{"a.png"});
  CHECK(find_inputs({folder / "in", folder / "in/"}, "").size() == 3);
  CHECK(outputs(find_inputs({folder / "in", folder / "in/"}, "")) == Names{"a", "link/c", "sub/b"});
}

TEST_CASE("several folders are mirrored under their own names") {
  const TempFolder folder;
  touch(folder, {"x/scan/a.png", "y/scan/a.png", "z/b.png", "x/scan/s/c.tif"});
  const auto files = find_inputs({folder / "x/scan", folder / "y/scan/", folder / "z"}, "");
  CHECK(outputs(files) == Names{"scan/a", "scan/s/c", "scan-2/a", "z/b"});
}

TEST_CASE("names that would clash keep their extension, and get a number if that is not enough") {
  const TempFolder folder;
  touch(folder,
        {"f/a.png", "f/a.tif", "f/b.png", "f/a.png.bmp", "p/q.png", "r/q.png", "r/q-2.png"});
  CHECK(outputs(find_inputs({folder / "f"}, "")) == Names{"a.png-2", "a.png", "a.tif", "b"});
  CHECK(outputs(find_inputs({folder / "p/q.png", folder / "r/q.png", folder / "r/q-2.png"}, "")) ==
        Names{"q.png", "q.png-2", "q-2"});
}

TEST_CASE("a file called like a page of another one keeps its extension") {
  const TempFolder folder;
  touch(folder, {"a.tif", "a.page002.tif", "s.page001.tif", "s.page002.tif"});
  const auto files = find_inputs({folder.path()}, "");
  CHECK(outputs(files) == Names{"a.page002.tif", "a", "s.page001", "s.page002"});
  CHECK(output_stem(files[1], 0, 1) == "a");
  CHECK(output_stem(files[1], 1, 2) == "a.page002");
  CHECK(output_stem(files[1], 1233, 2000) == "a.page1234");
}

TEST_CASE("files named directly are taken whatever their extension") {
  const TempFolder folder;
  touch(folder, {"a.dat", ".b.png", "v1.5"});
  const auto files = find_inputs({folder / "a.dat", folder / ".b.png", folder / "v1.5"}, "");
  CHECK(outputs(files) == Names{"a.dat", ".b", "v1.5"});
}

TEST_CASE("missing inputs and folders without images are one sentence") {
  const TempFolder folder;
  touch(folder, {"empty/readme.txt", "full/a.png"});
  CHECK_THAT(sentence_of(ErrorKind::kInput, [&] { find_inputs({folder / "gone"}, ""); }),
             Contains("gone: there is no such file or folder"));
  CHECK_THAT(
      sentence_of(ErrorKind::kInput,
                  [&] {
                    find_inputs({folder / "full", folder / "empty"}, "");
                  }),
      Contains("empty: no image in this folder") && Contains("png jpg jpeg") && Contains("tiff"));
}
