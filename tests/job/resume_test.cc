#include "job/resume.h"

#include <catch2/catch.hpp>

#include "image/temp_folder.h"
#include "job/unfinished_result.h"
#include "report/record_sample.h"

using namespace stillfield;
using namespace stillfield::test;

namespace {

std::optional<ImageRecord> found_with(const fs::path& stem, const std::string& digest) {
  return finished_record(stem, [&](const ImageRecord&) { return digest; });
}

}  // namespace

TEST_CASE("a result is finished when its record fits and all its files are there") {
  const TempFolder folder;
  const fs::path stem = folder / "heat.1";
  ImageRecord record = record_sample();
  record.outputs = {{".labels.tif", 3, ""}, {".entropy.tif", 5, ""}};
  CHECK_FALSE(has_record(stem));
  CHECK_FALSE(found_with(stem, record.settings_digest));

  write_record(folder / "heat.1.record.json", record);
  CHECK(has_record(stem));
  CHECK_FALSE(found_with(stem, record.settings_digest));  // no maps

  put(folder / "heat.1.labels.tif", "abc");
  put(folder / "heat.1.entropy.tif", "abcde");
  const auto found = found_with(stem, record.settings_digest);
  REQUIRE(found);
  CHECK(record_text(*found) == record_text(record));

  CHECK_FALSE(found_with(stem, std::string(64, 'z')));  // other settings
  put(folder / "heat.1.entropy.tif", "abcd");           // cut short
  CHECK_FALSE(found_with(stem, record.settings_digest));
}

TEST_CASE("a damaged record is no finished result") {
  const TempFolder folder;
  put(folder / "a.record.json", record_text(record_sample()).substr(0, 100));
  CHECK(has_record(folder / "a"));
  CHECK_FALSE(found_with(folder / "a", record_sample().settings_digest));
}

TEST_CASE("a result in the making takes the old one away, and itself if it is not finished") {
  const TempFolder folder;
  const fs::path stem = folder / "a";
  ImageRecord old = record_sample();
  old.outputs = {{".draws.tif", 3, ""}, {"/../other.tif", 3, ""}};
  put(folder / "a.draws.tif", "old");
  put(folder / "other.tif", "not ours");
  put(folder / "a.labels.tif", "older");
  write_record(folder / "a.record.json", old);
  ImageRecord record = record_sample();
  record.outputs.clear();
  {
    const UnfinishedResult unfinished(stem, record);
    CHECK_FALSE(fs::exists(folder / "a.draws.tif"));
    CHECK_FALSE(has_record(stem));
    CHECK(fs::exists(folder / "other.tif"));
    put(folder / "a.labels.tif", "new");
    record.outputs.push_back({".labels.tif", 3, ""});
  }
  CHECK_FALSE(fs::exists(folder / "a.labels.tif"));
  {
    const UnfinishedResult unfinished(stem, record);
    put(folder / "a.labels.tif", "new");
    write_record(folder / "a.record.json", record);
  }
  CHECK(get(folder / "a.labels.tif") == "new");
  CHECK(has_record(stem));
}
