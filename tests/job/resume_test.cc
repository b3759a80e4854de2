#include "job/resume.h"

#include <catch2/catch.hpp>

#include "image/temp_folder.h"
#include "report/record_sample.h"

using namespace stillfield;
using namespace stillfield::test;

TEST_CASE("a result is finished when its record fits and all its files are there") {
  const TempFolder folder;
  const fs::path stem = folder / "heat.1";
  ImageRecord record = record_sample();
  record.outputs = {{".labels.tif", 3, ""}, {".entropy.tif", 5, ""}};
  CHECK_FALSE(has_record(stem));
  CHECK_FALSE(finished_record(stem, record.settings_digest));

  write_record(folder / "heat.1.record.json", record);
  CHECK(has_record(stem));
  CHECK_FALSE(finished_record(stem, record.settings_digest));  // no maps

  put(folder / "heat.1.labels.tif", "abc");
  put(folder / "heat.1.entropy.tif", "abcde");
  const auto found = finished_record(stem, record.settings_digest);
  REQUIRE(found);
  CHECK(record_text(*found) == record_text(record));

  CHECK_FALSE(finished_record(stem, std::string(64, 'z')));  // other settings
  put(folder / "heat.1.entropy.tif", "abcd");                // cut short
  CHECK_FALSE(finished_record(stem, record.settings_digest));
}

TEST_CASE("a damaged record is no finished result") {
  const TempFolder folder;
  put(folder / "a.record.json", record_text(record_sample()).substr(0, 100));
  CHECK(has_record(folder / "a"));
  CHECK_FALSE(finished_record(folder / "a", record_sample().settings_digest));
}
