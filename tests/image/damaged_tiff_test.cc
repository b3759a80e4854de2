// Broken, cut and lying TIFF files give one sentence each and nothing on the error stream.
#include <catch2/catch.hpp>
#include <initializer_list>
#include <map>

#include "captured_stderr.h"
#include "image/read.h"
#include "image/write.h"
#include "temp_folder.h"
#include "tiff_maker.h"

using namespace stillfield;
using namespace stillfield::test;
using Catch::Matchers::Contains;
using Catch::Matchers::StartsWith;

namespace {

std::string sentence_for(const fs::path& file, const ReadLimits& limits = {}) {
  return sentence_of(ErrorKind::kInput, [&] {
    for (int page = count_pages(file) - 1; page >= 0; --page) read_page(file, page, limits);
  });
}

std::uint16_t noise(int x, int y, int c) {
  return static_cast<std::uint16_t>(pattern(x, y, c, 65535));
}

// A TIFF directory written by hand: little-endian, 16-byte values inline.
std::string hand_made(std::uint32_t width, std::uint32_t height, std::uint32_t strip_bytes,
                      std::uint32_t compression = 1) {
  const std::uint32_t entries[][3] = {
      {256, 4, width}, {257, 4, height}, {258, 3, 8},      {259, 3, compression}, {262, 3, 1},
      {273, 4, 8},     {277, 3, 1},      {278, 4, height}, {279, 4, strip_bytes}};
  const auto number = [](std::uint32_t value, int bytes) {
    std::string text;
    for (int i = 0; i < bytes; ++i) text += static_cast<char>(value >> (8 * i) & 0xff);
    return text;
  };
  std::string file = "II" + number(42, 2) + number(8 + 100, 4) + std::string(100, '\x05');
  file += number(std::size(entries), 2);
  for (const auto& [tag, type, value] : entries) {
    file += number(tag, 2) + number(type, 2) + number(1, 4) + number(value, 4);
  }
  return file + number(0, 4);
}

struct Entry {
  std::uint32_t tag;
  std::uint32_t type;  // 3: 16 bits, 4: 32 bits
  std::uint32_t count;
  std::uint32_t value;
};

// Grey of 8 x 4 pixels in one strip or tile of 32 bytes at 8, but for the entries given, which
// replace those of the same tag; the directory at 512 is followed by the one at `next`.
std::string lying(const std::vector<Entry>& lies, std::uint32_t next = 0, bool tiled = false) {
  std::map<std::uint32_t, Entry> entries;
  for (const Entry& entry : std::initializer_list<Entry>{{256, 4, 1, 8},
                                                         {257, 4, 1, 4},
                                                         {258, 3, 1, 8},
                                                         {259, 3, 1, 1},
                                                         {262, 3, 1, 1},
                                                         {277, 3, 1, 1}}) {
    entries[entry.tag] = entry;
  }
  if (tiled) {
    for (const Entry& entry : std::initializer_list<Entry>{
             {322, 4, 1, 16}, {323, 4, 1, 16}, {324, 4, 1, 8}, {325, 4, 1, 256}}) {
      entries[entry.tag] = entry;
    }
  } else {
    entries[273] = {273, 4, 1, 8};
    entries[278] = {278, 4, 1, 4};
    entries[279] = {279, 4, 1, 32};
  }
  for (const Entry& entry : lies) entries[entry.tag] = entry;
  const auto number = [](std::uint32_t value, int bytes) {
    std::string text;
    for (int i = 0; i < bytes; ++i) text += static_cast<char>(value >> (8 * i) & 0xff);
    return text;
  };
  std::string file = "II" + number(42, 2) + number(512, 4);
  file.resize(512, '\x05');
  file += number(static_cast<std::uint32_t>(entries.size()), 2);
  for (const auto& [tag, entry] : entries) {
    file +=
        number(tag, 2) + number(entry.type, 2) + number(entry.count, 4) + number(entry.value, 4);
  }
  return file + number(next, 4);
}

}  // namespace

TEST_CASE("a hand-made TIFF of 10 x 10 is read, so the cases below fail for their own reasons") {
  const TempFolder folder;
  put(folder / "a.tif", hand_made(10, 10, 100));
  REQUIRE(sentence_for(folder / "a.tif") == "no error");
  CHECK(read_page(folder / "a.tif").pixels.at(9, 9) == 5.0f);
}

TEST_CASE("a tiny TIFF that claims 100000 x 100000 pixels is refused by its header") {
  const TempFolder folder;
  put(folder / "a.tif", hand_made(100000, 100000, 100));
  CHECK_THAT(sentence_for(folder / "a.tif"),
             StartsWith((folder / "a.tif").string() +
                        ": the header claims 100000 x 100000 pixels, more than the limit"));
}

TEST_CASE("a TIFF that claims more data than there are is refused before reading") {
  const TempFolder folder;
  const CapturedStderr capture;
  put(folder / "a.tif", hand_made(30000, 30000, 100));
  CHECK_THAT(sentence_for(folder / "a.tif"), Contains("the file is truncated"));
  put(folder / "a.tif", hand_made(30000, 30000, 100, COMPRESSION_ADOBE_DEFLATE));
  CHECK_THAT(sentence_for(folder / "a.tif"), Contains("less data than its header claims"));
  put(folder / "a.tif", hand_made(30000, 30000, 900000000));
  CHECK_THAT(sentence_for(folder / "a.tif"), Contains("the file is truncated"));
  put(folder / "a.tif", hand_made(10, 10, 100, COMPRESSION_ADOBE_DEFLATE));
  CHECK_THAT(sentence_for(folder / "a.tif"), Contains("strip or tile 1 of the TIFF is damaged"));
  put(folder / "a.tif", hand_made(0, 10, 100));
  CHECK_THAT(sentence_for(folder / "a.tif"), StartsWith((folder / "a.tif").string() + ": "));
  CHECK(capture.text().empty());
}

TEST_CASE("every cut through a TIFF is noticed, silently") {
  const TempFolder folder;
  for (const int compression : {COMPRESSION_NONE, COMPRESSION_LZW, COMPRESSION_ADOBE_DEFLATE}) {
    for (const int tile : {0, 16}) {
      CAPTURE(compression, tile);
      TiffRecipe recipe;
      recipe.compression = compression;
      recipe.tile = tile;
      TIFF* tiff = TIFFOpen((folder / "whole.tif").c_str(), "w");
      add_page<std::uint16_t>(tiff, recipe, SAMPLEFORMAT_UINT, noise);
      add_page<std::uint16_t>(tiff, recipe, SAMPLEFORMAT_UINT, noise);
      TIFFClose(tiff);
      REQUIRE(sentence_for(folder / "whole.tif") == "no error");
      const std::string whole = get(folder / "whole.tif");
      const CapturedStderr capture;
      int unnoticed = 0;
      for (std::size_t length = 1; length < whole.size(); length += whole.size() / 60) {
        put(folder / "cut.tif", whole.substr(0, length));
        unnoticed += sentence_for(folder / "cut.tif") == "no error";
      }
      put(folder / "cut.tif", whole.substr(0, whole.size() - 1));
      unnoticed += sentence_for(folder / "cut.tif") == "no error";
      CHECK(unnoticed == 0);
      CHECK(capture.text().empty());
    }
  }
}

TEST_CASE("our own compressed TIFF with a damaged strip is refused") {
  const TempFolder folder;
  Volume<float> image({200, 100});
  for (int y = 0; y < 100; ++y) {
    for (int x = 0; x < 200; ++x) image.at(x, y) = static_cast<float>(noise(x, y, 0));
  }
  write_tiff(folder / "a.tif", image.view());
  std::string bytes = get(folder / "a.tif");
  for (std::size_t i = 2000; i < 2100; ++i) bytes[i] = static_cast<char>(bytes[i] ^ 0x5a);
  put(folder / "a.tif", bytes);
  const CapturedStderr capture;
  CHECK_THAT(sentence_for(folder / "a.tif"), Contains("is damaged"));
  CHECK(capture.text().empty());
}

TEST_CASE("bytes changed at random never crash the reader and never chatter") {
  const TempFolder folder;
  TiffRecipe recipe;
  recipe.compression = COMPRESSION_LZW;
  recipe.width = 20;
  recipe.height = 10;
  make_tiff<std::uint16_t>(folder / "a.tif", recipe, SAMPLEFORMAT_UINT, noise);
  const std::string whole = get(folder / "a.tif");
  const CapturedStderr capture;
  std::uint32_t state = 12345;
  int outcomes[2] = {};
  for (int i = 0; i < 1000; ++i) {
    std::string bytes = whole;
    for (int k = 0; k < 3; ++k) {
      state = state * 1664525u + 1013904223u;
      const std::size_t at =
          (i % 2 ? bytes.size() - 1 - (state >> 8) % 200 : (state >> 8) % bytes.size());
      bytes[at] = static_cast<char>(state >> 24);
    }
    put(folder / "b.tif", bytes);
    const std::string sentence = sentence_for(folder / "b.tif", {1 << 20});
    REQUIRE(sentence.substr(0, 10) != "wrong kind");
    ++outcomes[sentence == "no error"];
  }
  CHECK(outcomes[0] > 50);
  CHECK(outcomes[1] > 50);
  CHECK(capture.text().empty());
}

TEST_CASE("sample formats and colour models that cannot be read are named") {
  const TempFolder folder;
  const fs::path file = folder / "a.tif";
  TiffRecipe recipe;
  make_tiff<std::uint16_t>(file, recipe, SAMPLEFORMAT_IEEEFP, noise);  // half floats
  CHECK_THAT(sentence_for(file), Contains("samples of format 3 with 16 bits cannot be read"));
  make_tiff<std::uint64_t>(file, recipe, SAMPLEFORMAT_UINT, noise);
  CHECK_THAT(sentence_for(file), Contains("with 64 bits cannot be read"));
  recipe.channels = 5;
  make_tiff<std::uint16_t>(file, recipe, SAMPLEFORMAT_UINT, noise);
  CHECK_THAT(sentence_for(file), Contains("has 5 channels that are not grey or RGB"));
  recipe.channels = 4;
  recipe.photometric = PHOTOMETRIC_SEPARATED;
  make_tiff<std::uint16_t>(file, recipe, SAMPLEFORMAT_UINT, noise);
  CHECK_THAT(sentence_for(file), Contains("colour model 5 cannot be read"));
}

TEST_CASE(
    "headers that lie about tiles, strips, channels and pages are refused before allocation") {
  const TempFolder folder;
  const fs::path file = folder / "a.tif";
  const auto sentence = [&](const std::string& bytes) {
    put(file, bytes);
    return sentence_for(file);
  };
  const CapturedStderr capture;
  REQUIRE(sentence(lying({})) == "no error");
  REQUIRE(sentence(lying({}, 0, true)) == "no error");
  constexpr std::uint32_t kMost = 0xffffffff;

  CHECK_THAT(sentence(lying({{256, 4, 1, kMost}, {257, 4, 1, kMost}})),
             StartsWith(file.string()));  // libtiff refuses it first
  // Tiles: larger than the limit; within it, but not with the padding; of no size.
  CHECK_THAT(sentence(lying({{322, 4, 1, 0x7ffffff0}, {323, 4, 1, 0x7ffffff0}}, 0, true)),
             Contains("more than the limit"));
  CHECK_THAT(sentence(lying({{256, 4, 1, 1},
                             {257, 4, 1, 1 << 16},
                             {322, 4, 1, 1 << 15},
                             {323, 4, 1, 1 << 15},
                             {324, 4, 2, 8},
                             {325, 4, 2, 8}},
                            0, true)),
             Contains("32768 x 65536 pixels, more than the limit"));
  CHECK_THAT(sentence(lying({{322, 4, 1, 0}}, 0, true)), StartsWith(file.string()));
  CHECK_THAT(sentence(lying({{322, 4, 1, 1 << 14}, {323, 4, 1, 1 << 14}}, 0, true)),
             Contains("less data than its header claims"));
  // Strips: more of them than the directory has room for, too large, outside the file.
  CHECK_THAT(sentence(lying({{257, 4, 1, 1 << 27}, {278, 4, 1, 1}, {273, 4, kMost, 8}})),
             StartsWith(file.string()));
  CHECK(sentence(lying({{279, 4, 1, kMost}})) == "no error");  // libtiff counts anew
  CHECK_THAT(sentence(lying({{273, 4, 1, kMost}})), Contains("the file is truncated"));
  CHECK(sentence(lying({{278, 4, 1, kMost}})) == "no error");  // means one strip
  // 65535 channels, in planes or not.
  CHECK_THAT(sentence(lying({{277, 3, 1, 65535}})), StartsWith(file.string()));
  CHECK_THAT(sentence(lying({{277, 3, 1, 65535}, {284, 3, 1, 2}})), StartsWith(file.string()));
  // A description longer than the file.
  const std::string long_text = sentence(lying({{270, 2, kMost, 8}}));
  CHECK((long_text == "no error" || long_text.starts_with(file.string())));
  // Directories in a ring of one, and after the end.
  CHECK(sentence(lying({}, 512)) == "no error");  // the ring ends where it began
  CHECK(count_pages(file) == 1);
  CHECK_THAT(sentence(lying({}, 100000)), Contains("directory"));
  CHECK(capture.text().empty());
}
