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

TEST_CASE("the digest of a mask follows its content, of a folder also the names in it") {
  const TempFolder folder;
  CHECK(mask_digest({}).empty());
  CHECK(mask_digest(folder / "gone").empty());
  save_mask(folder / "masks/a.png", {4, 2});
  save_mask(folder / "m.png", {4, 2});
  const std::string file = mask_digest(folder / "m.png");
  const std::string before = mask_digest(folder / "masks");
  CHECK(file.size() == 64);
  save_mask(folder / "m.png", {4, 3});
  CHECK(mask_digest(folder / "m.png") != file);
  save_mask(folder / "masks/heat/b.png", {4, 2});
  const std::string two = mask_digest(folder / "masks");
  CHECK(two != before);
  fs::rename(folder / "masks/heat/b.png", folder / "masks/heat/c.png");
  CHECK(mask_digest(folder / "masks") != two);
}
