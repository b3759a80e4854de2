// The rules of check.h on the real src/.
#include <algorithm>
#include <catch2/catch.hpp>
#include <filesystem>
#include <fstream>
#include <iterator>
#include <regex>

#include "architecture/check.h"
#include "architecture/rooms.h"

using namespace stillfield::architecture;

namespace {

const std::filesystem::path kSrc = std::filesystem::path(STILLFIELD_SOURCE_DIR) / "src";

}  // namespace

TEST_CASE("every file of src/ keeps the rules") {
  const std::vector<SourceFile> files = read_sources(kSrc);
  REQUIRE(files.size() > 5);
  std::string list;
  for (const SourceFile& file : files) {
    for (const Violation& v : check_all(file)) {
      list += "\nsrc/" + v.file + ":" + std::to_string(v.line) + ": " + v.what;
    }
  }
  INFO(list);
  CHECK(list.empty());
}

TEST_CASE("CMake builds the rooms in the same order") {
  std::ifstream stream(kSrc / "CMakeLists.txt");
  const std::string text{std::istreambuf_iterator<char>(stream), {}};
  std::string order;
  for (const std::string& room : room_order()) order += " " + room;
  std::smatch match;
  REQUIRE(std::regex_search(text, match, std::regex(R"(foreach\(ROOM((\s+\w+)+)\))")));
  CHECK(std::regex_replace(match[1].str(), std::regex(R"(\s+)"), " ") == order);
}

TEST_CASE("the reading path leads from main to a kernel") {
  const std::vector<SourceFile> files = read_sources(kSrc);
  std::vector<std::string> kernels;
  for (const SourceFile& file : files) {
    if (room_of(file.path) == "simd") kernels.push_back(file.path);
  }
  struct Step {
    std::string from;
    std::vector<std::string> to;
  };
  const std::vector<Step> steps = {
      {"cli/main.cc", {"job/restore_one.h", "job/folder.h"}},
      {"job/restore_one.cc", {"sampler/sweep.h"}},
      {"sampler/sweep.cc", kernels},
  };
  for (const Step& step : steps) {
    CAPTURE(step.from, step.to);
    // A room without CMakeLists.txt is not built yet and has no files to read.
    if (!std::filesystem::exists(kSrc / room_of(step.from) / "CMakeLists.txt")) {
      WARN("no room " << room_of(step.from) << " yet");
      continue;
    }
    CHECK(std::filesystem::exists(kSrc / step.from));
    CHECK(reading_path_leads(files, step.from, step.to));
  }
}
