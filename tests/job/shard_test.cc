// Parts of a run, the lock of its folder, and what an image needs.
#include "job/shard.h"

#include <catch2/catch.hpp>
#include <cmath>

#include "image/temp_folder.h"
#include "job/folder_lock.h"
#include "job/resource_need.h"

using namespace stillfield;
using namespace stillfield::test;
using Catch::Matchers::Contains;

TEST_CASE("parts are written I/N, and their files are told from others") {
  CHECK(parse_shard("2/5") == Shard{2, 5});
  for (const char* text :
       {"", "2", "0/5", "6/5", "2/0", "-1/5", "2/5x", "02/5", "2/ 5", "/", "1/10001"}) {
    CAPTURE(text);
    CHECK_FALSE(parse_shard(text));
  }
  CHECK(shard_file({2, 5}) == "shard-2-of-5.json");
  CHECK(shard_of_file("shard-2-of-5.json") == Shard{2, 5});
  for (const char* name : {"shard-2-of-5.jso", "shard-6-of-5.json", "shard-.json", "run.json"}) {
    CHECK_FALSE(shard_of_file(name));
  }
}

// Every name in exactly one of five parts; 2000 names, so each part has 400 give or take four
// standard deviations of the binomial (17.9 each), and the split is fixed: no chance is left.
TEST_CASE("every image is in one part, and parts are of like size") {
  std::vector<int> sizes(5);
  for (int i = 0; i < 2000; ++i) {
    int parts = 0;
    for (int part = 1; part <= 5; ++part) {
      if (!is_in_shard({part, 5}, "heat/" + std::to_string(i) + ".png")) continue;
      ++parts;
      ++sizes[static_cast<std::size_t>(part - 1)];
    }
    CHECK(parts == 1);
  }
  for (const int size : sizes) CHECK(std::abs(size - 400) < 72);
  CHECK(is_in_shard({1, 1}, "a.png"));
}

TEST_CASE("one run in a folder, or any number of parts") {
  const TempFolder folder;
  {
    const FolderLock one(folder.path(), true);
    const FolderLock another(folder.path(), true);
    CHECK_THAT(sentence_of(ErrorKind::kUsage, [&] { FolderLock(folder.path(), false); }),
               Contains("another run is at work"));
  }
  const FolderLock whole(folder.path(), false);
  CHECK_THAT(sentence_of(ErrorKind::kUsage, [&] { FolderLock(folder.path(), true); }),
             Contains("--shard"));
}

TEST_CASE("needs grow with pixels, classes, chains and threads, and are told when too large") {
  SegmentSettings two;
  SegmentSettings eight;
  eight.classes = 8;
  const PageShape small{1000, 1000, 1, 8};
  const PageShape large{30000, 30000, 1, 8};
  CHECK(need_of(small, eight, 1).bytes > need_of(small, two, 1).bytes);
  CHECK(need_of(small, two, 4).bytes > need_of(small, two, 1).bytes);
  CHECK(need_of(large, two, 1).bytes > 800 * need_of(small, two, 1).bytes / 2);
  const ResourceNeed need = need_of(large, two, 1);
  const std::string sentence = memory_objection(large, need, 4'000'000'000);
  CHECK_THAT(sentence, Contains("30000 x 30000 pixels need about " + memory_text(need.bytes)) &&
                           Contains("4.0 GB may be used"));
  CHECK(memory_objection(small, need_of(small, two, 1), 4'000'000'000).empty());
  CHECK(memory_text(31.14e9) == "31.2 GB");
  CHECK(memory_text(12e6) == "12 MB");
  CHECK(available_memory() > 0);
}
