// Leftovers of killed runs, changed files, digests of folders and sizes from headers.
#include "image/leftovers.h"

#include <catch2/catch.hpp>

#include "core/utf8.h"
#include "image/atomic_file.h"
#include "image/digest.h"
#include "image/file_stamp.h"
#include "image/page_shape.h"
#include "image/write.h"
#include "temp_folder.h"

using namespace stillfield;
using namespace stillfield::test;
using Catch::Matchers::Contains;

TEST_CASE("names of temporary files are told from all others") {
  CHECK(partial_name("a.tif", 71, 3) == ".a.tif.stillfield-71-3.partial");
  CHECK(is_partial_name(partial_name("a.tif", 71, 3)));
  CHECK(is_partial_name(partial_name(std::string(300, 'x'), 71, 3)));
  CHECK(partial_name(std::string(300, 'x'), 4194304, 4000000000U).size() <= 255);
  for (const char* name :
       {"a.tif.stillfield-71-3.partial", ".a.tif.stillfield-71-3", ".a.tif.stillfield-71-.partial",
        ".a.tif.stillfield--3.partial", ".stillfield-71-3.partial", ".a.partial", ".partial", "",
        ".a.tif.other-71-3.partial", ".a.stillfield-7x-3.partial"}) {
    CAPTURE(name);
    CHECK_FALSE(is_partial_name(name));
  }
}

TEST_CASE("leftovers of the dead go, files of the living and of others stay") {
  const TempFolder folder;
  put(folder / partial_name("a.tif", 71, 3), "half");
  put(folder / ".a.tif.partial-71-3", "another's");
  put(folder / ("sub/" + partial_name("b.tif", 71, 3)), "half");
  fs::create_directory(folder / partial_name("c", 71, 3));
  put(folder / "kept.txt", "x");
  fs::create_symlink(folder / "kept.txt", folder / partial_name("d", 71, 3));
  {
    AtomicFile living(folder / "b.txt");
    living.write("whole");
    CHECK(remove_leftovers(folder.path()) == 1);
    CHECK(fs::exists(living.temporary()));
    living.commit();
  }
  CHECK(get(folder / "b.txt") == "whole");
  CHECK_FALSE(fs::exists(folder / partial_name("a.tif", 71, 3)));
  CHECK(entries_in(folder.path()) == 6);
  CHECK(remove_leftovers(folder / "sub") == 1);
  CHECK(remove_leftovers(folder / "gone") == 0);
}

TEST_CASE("a file that holds the same bytes already is left alone") {
  const TempFolder folder;
  const std::string text(100000, 'x');
  put(folder / "a.txt", text);
  const auto long_ago = fs::last_write_time(folder / "a.txt") - std::chrono::hours(1);
  const auto commit = [&](const std::string& content) {
    fs::last_write_time(folder / "a.txt", long_ago);
    AtomicFile file(folder / "a.txt");
    file.write(content);
    file.commit_if_changed();
    return fs::last_write_time(folder / "a.txt") == long_ago;
  };
  CHECK(commit(text));
  CHECK_FALSE(commit(text.substr(1) + "y"));
  CHECK_FALSE(commit(text + "y"));
  CHECK(get(folder / "a.txt") == text + "y");
  CHECK(entries_in(folder.path()) == 1);
}

TEST_CASE("a file that grows, is replaced or vanishes is noticed") {
  const TempFolder folder;
  const fs::path file = folder / "a.png";
  put(file, "abc");
  const FileStamp before = stamp_of(file);
  CHECK_NOTHROW(check_unchanged(file, before));
  put(file, "abcd");
  CHECK_THAT(sentence_of(ErrorKind::kInput, [&] { check_unchanged(file, before); }),
             Contains("changed while it was read"));
  const FileStamp now = stamp_of(file);
  put(folder / "b.png", "abcd");
  fs::last_write_time(folder / "b.png", fs::last_write_time(file));
  fs::rename(folder / "b.png", file);
  CHECK_THAT(sentence_of(ErrorKind::kInput, [&] { check_unchanged(file, now); }),
             Contains("changed while it was read"));
  fs::remove(file);
  CHECK_THAT(sentence_of(ErrorKind::kInput, [&] { check_unchanged(file, now); }),
             Contains("vanished"));
}

TEST_CASE("the digest of a folder follows contents and names") {
  const TempFolder folder;
  CHECK(sha256_of_tree({}).empty());
  CHECK(sha256_of_tree(folder / "gone").empty());
  put(folder / "in/a.png", "a");
  put(folder / "in/sub/b.png", "b");
  CHECK(sha256_of_tree(folder / "in/a.png") == sha256_of_file(folder / "in/a.png"));
  const std::string before = sha256_of_tree(folder / "in");
  fs::rename(folder / "in/sub/b.png", folder / "in/sub/c.png");
  const std::string renamed = sha256_of_tree(folder / "in");
  CHECK(renamed != before);
  put(folder / "in/sub/c.png", "c");
  CHECK(sha256_of_tree(folder / "in") != renamed);
}

// Sizes are those of the pictures written; headers of JPEG and BMP by hand after ITU-T T.81 B.2.2
// and the BITMAPINFOHEADER.
TEST_CASE("sizes come from headers alone") {
  const TempFolder folder;
  const auto shape = [&](const char* name) {
    const PageShape s = page_shape(folder / name, 0, {});
    return std::vector<std::int64_t>{s.width, s.height, s.channels, s.bits};
  };
  using Shape = std::vector<std::int64_t>;
  const Volume<std::uint8_t> grey({7, 5});
  write_png(folder / "a.png", grey.view());
  write_png(folder / "c.png", {grey.view(), grey.view(), grey.view()});
  write_tiff(folder / "a.tif", Volume<float>({9, 4}).view());
  put(folder / "a.pgm", "P5 # comment 1 2\n# 3\n 30000\t40000 65535\nx");
  put(folder / "a.ppm", "P6\n3 4\n255\n");
  put(folder / "a.pbm", "P4 12 13\n");
  put(folder / "a.jpg",
      std::string("\xff\xd8\xff\xe0\0\4ab\xff\xff\xc2\0\x11\x08\1\2\3\4\3xxxxxxxxx", 28));
  put(folder / "a.bmp", std::string("BM") + std::string(16, '\0') +
                            std::string("\x10\0\0\0\xf0\xff\xff\xff\1\0\x18\0xxxxx", 17));
  put(folder / "bad.pgm", "P5 x");
  CHECK(shape("a.png") == Shape{7, 5, 1, 8});
  CHECK(shape("c.png") == Shape{7, 5, 3, 8});
  CHECK(shape("a.tif") == Shape{9, 4, 1, 32});
  CHECK(shape("a.pgm") == Shape{30000, 40000, 1, 16});
  CHECK(shape("a.ppm") == Shape{3, 4, 3, 8});
  CHECK(shape("a.pbm") == Shape{12, 13, 1, 8});
  CHECK(shape("a.jpg") == Shape{0x304, 0x102, 3, 8});
  CHECK(shape("a.bmp") == Shape{16, 16, 3, 8});
  CHECK(shape("bad.pgm") == Shape{0, 0, 1, 8});
  CHECK_THROWS_AS(page_shape(folder / "gone.png", 0, {}), Error);
}

// Unicode Standard 15, table 3-7: bounds of the well-formed sequences.
TEST_CASE("names that are not UTF-8 become so, one mark a byte") {
  const std::string mark = "\xEF\xBF\xBD";
  CHECK(utf8_name("") == "");
  CHECK(utf8_name("caf\xc3\xa9 \xe6\xa0\xb7 \xf0\x9f\x98\x80") ==
        "caf\xc3\xa9 \xe6\xa0\xb7 \xf0\x9f\x98\x80");
  CHECK(utf8_name("caf\xe9.png") == "caf" + mark + ".png");
  CHECK(utf8_name("\xc0\x80") == mark + mark);
  CHECK(utf8_name("\xed\xa0\x80") == mark + mark + mark);
  CHECK(utf8_name("\xf4\x90\x80\x80") == mark + mark + mark + mark);
  CHECK(utf8_name("\xc3") == mark);
}
