#include "job/mask.h"

#include <catch2/catch.hpp>

#include "core/error.h"
#include "image/temp_folder.h"
#include "image/write.h"

using namespace stillfield;
using namespace stillfield::test;
using Catch::Matchers::Contains;

namespace {

FieldTask task_of(const fs::path& relative) {
  FieldTask task;
  task.file = "/somewhere" / relative;
  task.relative = relative;
  return task;
}

void save_mask(const fs::path& file, Extent extent) {
  Volume<std::uint8_t> mask(extent);
  for (int x = 1; x < extent.width; ++x) mask.at(x, 0) = static_cast<std::uint8_t>(x);
  fs::create_directories(file.parent_path());
  write_png(file, mask.view());
}

}  // namespace

TEST_CASE("a mask file serves all images; what is not 0 is used") {
  const TempFolder folder;
  save_mask(folder / "m.png", {4, 2});
  const auto usable = read_mask(folder / "m.png", task_of("a.tif"), {4, 2}, {});
  CHECK(usable.at(0, 0) == 0);
  CHECK(usable.at(1, 0) == 1);
  CHECK(usable.at(3, 0) == 1);
  CHECK(usable.at(3, 1) == 0);
  const auto all = read_mask({}, task_of("a.tif"), {4, 2}, {});
  CHECK(all.at(0, 0) == 1);
}

TEST_CASE("a folder of masks is searched under the name of the image") {
  const TempFolder folder;
  save_mask(folder / "masks/heat/a.png", {4, 2});
  CHECK(read_mask(folder / "masks", task_of("heat/a.tif"), {4, 2}, {}).at(2, 0) == 1);
  CHECK_THAT(sentence_of(ErrorKind::kInput,
                         [&] {
                           read_mask(folder / "masks", task_of("b.tif"), {4, 2}, {});
                         }),
             Contains("has no file") && Contains("b.tif"));
}

TEST_CASE("a mask of another size is refused with both sizes") {
  const TempFolder folder;
  save_mask(folder / "m.png", {4, 2});
  CHECK_THAT(sentence_of(ErrorKind::kInput,
                         [&] {
                           read_mask(folder / "m.png", task_of("a.tif"), {5, 2}, {});
                         }),
             Contains("4 x 2") && Contains("5 x 2"));
}

TEST_CASE("the digest of a mask follows the content of the image's own mask") {
  const TempFolder folder;
  CHECK(MaskDigest({}).of(task_of("a.tif")).empty());
  save_mask(folder / "m.png", {4, 2});
  const std::string one = MaskDigest(folder / "m.png").of(task_of("a.tif"));
  CHECK(one.size() == 64);
  CHECK(MaskDigest(folder / "m.png").of(task_of("b.tif")) == one);
  save_mask(folder / "masks/a.png", {4, 2});
  save_mask(folder / "masks/heat/b.png", {4, 2});
  const MaskDigest digest(folder / "masks");
  CHECK(digest.of(task_of("a.tif")) == one);
  save_mask(folder / "masks/heat/b.png", {4, 3});
  CHECK(digest.of(task_of("a.tif")) == one);
  CHECK(digest.of(task_of("heat/b.tif")) != one);
  CHECK_THAT(sentence_of(ErrorKind::kInput, [&] { digest.of(task_of("c.tif")); }),
             Contains("has no file"));
  CHECK_THAT(sentence_of(ErrorKind::kInput, [&] { MaskDigest(folder / "gone").of(task_of("a")); }),
             Contains("there is no such mask"));
}
