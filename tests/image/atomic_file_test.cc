#include "image/atomic_file.h"

#include <sys/resource.h>

#include <catch2/catch.hpp>
#include <csignal>

#include "image/write.h"
#include "temp_folder.h"

using namespace stillfield;
using namespace stillfield::test;
using Catch::Matchers::Contains;
using Catch::Matchers::StartsWith;

namespace {

// No file may grow beyond `bytes` while this lives: a full disk in small.
class FileSizeLimit {
 public:
  explicit FileSizeLimit(rlim_t bytes) : old_handler_(std::signal(SIGXFSZ, SIG_IGN)) {
    ::getrlimit(RLIMIT_FSIZE, &old_);
    rlimit limit = old_;
    limit.rlim_cur = bytes;
    ::setrlimit(RLIMIT_FSIZE, &limit);
  }
  ~FileSizeLimit() {
    ::setrlimit(RLIMIT_FSIZE, &old_);
    std::signal(SIGXFSZ, old_handler_);
  }

 private:
  void (*old_handler_)(int);
  rlimit old_{};
};

}  // namespace

TEST_CASE("a committed file holds all bytes under its name and nothing else stays") {
  const TempFolder folder;
  const fs::path target = folder / "new" / "deep" / "a \"b\" \xc3\xb1.txt";
  {
    AtomicFile file(target);
    file.write("one ");
    file.write("two");
    CHECK_FALSE(fs::exists(target));
    CHECK(file.temporary().parent_path() == target.parent_path());
    CHECK(file.temporary().filename().string()[0] == '.');
    file.commit();
  }
  CHECK(get(target) == "one two");
  CHECK(entries_in(target.parent_path()) == 1);
}

TEST_CASE("without commit the old file stays and the temporary goes") {
  const TempFolder folder;
  put(folder / "a.txt", "old");
  {
    AtomicFile file(folder / "a.txt");
    file.write("new");
    CHECK(entries_in(folder.path()) == 2);
  }
  CHECK(get(folder / "a.txt") == "old");
  CHECK(entries_in(folder.path()) == 1);
  write_text_atomically(folder / "a.txt", "newer");
  CHECK(get(folder / "a.txt") == "newer");
}

TEST_CASE("an output folder that is a file, or a target that is a folder, is one sentence") {
  const TempFolder folder;
  put(folder / "file", "x");
  const auto below_file = sentence_of(
      ErrorKind::kOutput, [&] { write_text_atomically(folder / "file" / "a.txt", "x"); });
  CHECK_THAT(below_file, StartsWith((folder / "file" / "a.txt").string() + ": ") &&
                             Contains("output folder cannot be made"));
  fs::create_directory(folder / "folder");
  const auto onto_folder =
      sentence_of(ErrorKind::kOutput, [&] { write_text_atomically(folder / "folder", "x"); });
  CHECK_THAT(onto_folder, Contains("cannot be given its name"));
  CHECK(entries_in(folder.path()) == 2);
}

TEST_CASE("a folder without write access is one sentence") {
  const TempFolder folder;
  fs::create_directory(folder / "locked");
  fs::permissions(folder / "locked", fs::perms::owner_read | fs::perms::owner_exec);
  if (::access((folder / "locked").c_str(), W_OK) == 0) {
    WARN("skipped: this user may write everywhere");
    return;
  }
  const auto sentence = sentence_of(
      ErrorKind::kOutput, [&] { write_text_atomically(folder / "locked" / "a.txt", "x"); });
  CHECK_THAT(sentence, Contains("choose an output folder with write access"));
}

TEST_CASE("a place where no folder can be made is one sentence, for root too") {
  const auto sentence = sentence_of(
      ErrorKind::kOutput, [] { write_text_atomically("/proc/stillfield-test/a.txt", "x"); });
  CHECK_THAT(sentence, Contains("/proc/stillfield-test/a.txt: ") && Contains("folder"));
}

TEST_CASE("running out of space leaves nothing behind") {
  const TempFolder folder;
  Volume<float> noise({256, 256});
  unsigned state = 1;
  for (int y = 0; y < 256; ++y) {
    for (int x = 0; x < 256; ++x) {
      noise.at(x, y) = static_cast<float>((state = state * 1664525u + 1013904223u) >> 8);
    }
  }
  std::string text;
  std::string tiff;
  {
    const FileSizeLimit limit(4096);
    text = sentence_of(ErrorKind::kOutput,
                       [&] { write_text_atomically(folder / "a.txt", std::string(9000, 'x')); });
    tiff = sentence_of(ErrorKind::kOutput, [&] { write_tiff(folder / "a.tif", noise.view()); });
  }
  CHECK_THAT(text, Contains("a.txt: writing failed"));
  CHECK_THAT(tiff, Contains("a.tif: writing the TIFF failed"));
  CHECK(entries_in(folder.path()) == 0);
}
