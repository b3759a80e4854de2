// Broken, cut, lying and foreign files give one sentence each and nothing on the error stream.
#include <sys/stat.h>

#include <catch2/catch.hpp>
#include <opencv2/imgcodecs.hpp>

#include "captured_stderr.h"
#include "image/digest.h"
#include "image/read.h"
#include "patterns.h"
#include "temp_folder.h"

using namespace stillfield;
using namespace stillfield::test;
using namespace std::string_literals;
using Catch::Matchers::Contains;
using Catch::Matchers::StartsWith;

namespace {

std::string sentence_for(const fs::path& file, const ReadLimits& limits = {}) {
  return sentence_of(ErrorKind::kInput, [&] { read_page(file, 0, limits); });
}

std::string encoded(const std::string& extension, int channels,
                    const std::vector<int>& settings = {}) {
  cv::Mat mat(40, 60, CV_8UC(channels));
  for (int y = 0; y < mat.rows; ++y) {
    for (int i = 0; i < mat.cols * channels; ++i) {
      mat.ptr(y)[i] = static_cast<std::uint8_t>(pattern(i, y, 0, 255));
    }
  }
  std::vector<unsigned char> bytes;
  REQUIRE(cv::imencode(extension, mat, bytes, settings));
  return {bytes.begin(), bytes.end()};
}

std::string little_endian(std::uint32_t value, int bytes) {
  std::string text;
  for (int i = 0; i < bytes; ++i) text += static_cast<char>(value >> (8 * i) & 0xff);
  return text;
}

// A PNG header whose checksum for 100000 x 100000, 8-bit grey, was computed with Python's zlib.
const std::string kHugePng =
    "\x89PNG\r\n\x1a\n\0\0\0\rIHDR\0\x01\x86\xa0\0\x01\x86\xa0\x08\0\0\0\0"s
    "\x8d\x39\x54\x14"s;

}  // namespace

TEST_CASE("files that are no images at all") {
  const TempFolder folder;
  fs::create_directory(folder / "folder.png");
  put(folder / "empty.png", "");
  put(folder / "text.png", "This is a letter, not a picture.\n");
  put(folder / "short.tif", "I");
  REQUIRE(::mkfifo((folder / "pipe.png").c_str(), 0600) == 0);
  const std::pair<std::string, std::string> cases[] = {
      {"gone.png", "there is no such file"},
      {"folder.png", "is a folder"},
      {"empty.png", "the file is empty"},
      {"text.png", "is not an image in a known format"},
      {"short.tif", "is not an image in a known"},
      {"pipe.png", "is not a regular file"},
      {"text.png/x.png", "there is no such file"}};
  for (const auto& [name, want] : cases) {
    CHECK_THAT(sentence_for(folder / name), StartsWith((folder / name).string() + ": " + want));
    CHECK_THAT(sentence_of(ErrorKind::kInput, [&, n = name] { count_pages(folder / n); }),
               Contains(want));
  }
}

TEST_CASE("a file without read permission") {
  const TempFolder folder;
  put(folder / "a.png", encoded(".png", 1));
  fs::permissions(folder / "a.png", fs::perms::none);
  if (::access((folder / "a.png").c_str(), R_OK) == 0) {
    WARN("skipped: this user may read everything");
    return;
  }
  CHECK_THAT(sentence_for(folder / "a.png"), Contains("no permission to read"));
}

TEST_CASE("every cut through PNG, JPEG, BMP and PNM is noticed, silently") {
  const TempFolder folder;
  const std::vector<std::string> wholes = {encoded(".png", 1),
                                           encoded(".png", 3),
                                           encoded(".jpg", 1),
                                           encoded(".bmp", 1),
                                           encoded(".jpg", 3, {cv::IMWRITE_JPEG_PROGRESSIVE, 1}),
                                           encoded(".bmp", 3),
                                           encoded(".pgm", 1),
                                           encoded(".ppm", 3),
                                           encoded(".ppm", 3, {cv::IMWRITE_PXM_BINARY, 0})};
  std::string printed;
  int unnoticed = 0;
  for (const auto& whole : wholes) {
    // A text file may lose its last blanks, and a digit of its last number is not missed either.
    const bool text = whole[0] == 'P' && whole[1] == '3';
    const std::size_t last =
        text ? whole.find_last_of(" \n", whole.find_last_not_of(" \n")) : whole.size() - 1;
    const std::size_t step = std::max<std::size_t>(1, whole.size() / 60);
    const CapturedStderr capture;
    for (std::size_t length = 1; length <= last; length += step) {
      put(folder / "cut", whole.substr(0, length));
      unnoticed += sentence_for(folder / "cut") == "no error";
    }
    put(folder / "cut", whole.substr(0, last));
    unnoticed += sentence_for(folder / "cut") == "no error";
    put(folder / "whole", whole);
    unnoticed += sentence_for(folder / "whole") != "no error";
    printed += capture.text();
  }
  CHECK(unnoticed == 0);
  CHECK(printed.empty());
}

TEST_CASE("a cut in the middle says truncated") {
  const TempFolder folder;
  for (const std::string extension : {".png", ".jpg", ".bmp", ".ppm"}) {
    const std::string whole = encoded(extension, 3);
    put(folder / "cut", whole.substr(0, whole.size() / 2));
    CHECK_THAT(sentence_for(folder / "cut"), Contains("the file is truncated"));
  }
}

TEST_CASE("a flipped bit in PNG data is found by the checksum") {
  const TempFolder folder;
  std::string bytes = encoded(".png", 1);
  bytes[bytes.size() / 2] = static_cast<char>(bytes[bytes.size() / 2] ^ 4);
  put(folder / "a.png", bytes);
  const CapturedStderr capture;
  CHECK_THAT(sentence_for(folder / "a.png"), Contains("checksum of PNG chunk IDAT is wrong"));
  CHECK(capture.text().empty());
}

TEST_CASE("optional PNG chunks, broken or not, neither matter nor chatter") {
  const TempFolder folder;
  std::string bytes = encoded(".png", 1);
  bytes.insert(33, "\0\0\0\x04gAMAabcd0000"s);  // after IHDR; nonsense value, wrong checksum
  put(folder / "a.png", bytes);
  const CapturedStderr capture;
  CHECK(sentence_for(folder / "a.png") == "no error");
  CHECK(capture.text().empty());
}

TEST_CASE("tiny files that claim 100000 x 100000 pixels are refused by their header") {
  const TempFolder folder;
  put(folder / "a.png", kHugePng);
  put(folder / "a.bmp", "BM"s + little_endian(70, 4) + little_endian(0, 4) + little_endian(54, 4) +
                            little_endian(40, 4) + little_endian(100000, 4) +
                            little_endian(100000, 4) + little_endian(1, 2) + little_endian(24, 2) +
                            std::string(40, '\0'));
  put(folder / "a.pgm", "P5 100000 100000 255\nabc");
  put(folder / "b.pgm", "P2 100000 100000 255\n1 2 3");
  for (const std::string name : {"a.png", "a.bmp", "a.pgm", "b.pgm"}) {
    CHECK_THAT(sentence_for(folder / name), Contains("claims 100000 x 100000 pixels, more than the "
                                                     "limit of 1073741824"));
  }
  put(folder / "c.pgm", "P5 99999999999999999999 99999999999999999999 255\nabc");
  CHECK_THAT(sentence_for(folder / "c.pgm"), Contains("more than the limit"));
  put(folder / "d.pgm", "P5 0 5 255\nabc");
  CHECK_THAT(sentence_for(folder / "d.pgm"), Contains("which is no image"));
}

TEST_CASE("the limit of pixels counts for every format") {
  const TempFolder folder;
  for (const std::string extension : {".png", ".jpg", ".bmp", ".ppm", ".tif"}) {
    CAPTURE(extension);
    put(folder / "a", encoded(extension, 3));
    CHECK(sentence_for(folder / "a", {60 * 40}) == "no error");
    CHECK_THAT(sentence_for(folder / "a", {60 * 40 - 1}),
               Contains("claims 60 x 40 pixels, more than the limit of 2399"));
  }
}

TEST_CASE("kinds of JPEG and BMP that cannot be read are named") {
  const TempFolder folder;
  std::string jpeg = encoded(".jpg", 1);
  const std::size_t frame = jpeg.find("\xff\xc0\0\x0b\x08"s);
  REQUIRE(frame != std::string::npos);
  jpeg[frame + 4] = 12;
  put(folder / "a.jpg", jpeg);
  CHECK_THAT(sentence_for(folder / "a.jpg"), Contains("12-bit JPEG"));

  std::string bmp = encoded(".bmp", 1);
  bmp[30] = 1;  // run-length coding
  put(folder / "a.bmp", bmp);
  CHECK_THAT(sentence_for(folder / "a.bmp"), Contains("is a compressed or 8-bit BMP"));
}

TEST_CASE("a JPEG with damaged data is refused, one with harmless dirt is noted, both silently") {
  const TempFolder folder;
  cv::Mat noise(64, 64, CV_8UC1);
  for (int y = 0; y < 64; ++y) {
    for (int x = 0; x < 64; ++x) {
      noise.at<std::uint8_t>(y, x) = static_cast<std::uint8_t>(pattern(x, y, 0, 255));
    }
  }
  REQUIRE(cv::imwrite((folder / "a.jpg").string(), noise));
  const std::string whole = get(folder / "a.jpg");
  const Field clean = read_page(folder / "a.jpg");
  CHECK(clean.notes.empty());
  const CapturedStderr capture;
  // The coded data follow the start of scan of one component: 2 + 8 bytes.
  const std::size_t scan = whole.find("\xff\xda") + 10;
  std::string damaged = whole;
  damaged.erase(scan + 400, 300);
  put(folder / "b.jpg", damaged);
  CHECK_THAT(sentence_of(ErrorKind::kInput, [&] { read_page(folder / "b.jpg"); }),
             Contains("the JPEG data are damaged ("));
  std::string dirty = whole;
  dirty.insert(whole.find("\xff\xc4"), "dirt");
  put(folder / "c.jpg", dirty);
  const Field field = read_page(folder / "c.jpg");
  REQUIRE(field.notes.size() == 1);
  CHECK_THAT(field.notes[0], Contains("the JPEG decoder warns: "));
  int wrong = 0;
  for (int y = 0; y < 64; ++y) {
    for (int x = 0; x < 64; ++x) wrong += field.pixels.at(x, y) != clean.pixels.at(x, y);
  }
  CHECK(wrong == 0);
  CHECK(capture.text().empty());
}
