#include "image/page_shape.h"

#include <algorithm>
#include <cctype>
#include <cstdlib>

#include "image/file_bytes.h"
#include "image/file_type.h"
#include "image/input_checks.h"
#include "image/read_tiff.h"

namespace stillfield {
namespace {

constexpr std::size_t kHeaderBytes = std::size_t{1}
                                     << 20;  // profiles may stand before a JPEG's size

PageShape png_shape(Bytes bytes) {
  constexpr unsigned kColourBit = 2;
  constexpr unsigned kPalette = 3;
  if (bytes.size() < 26) return {};
  const auto type = std::to_integer<unsigned>(bytes[25]);
  return {big_endian_32(bytes, 16), big_endian_32(bytes, 20),
          (type & kColourBit) != 0 && type != kPalette ? 3 : 1, std::to_integer<int>(bytes[24])};
}

PageShape bmp_shape(Bytes bytes) {
  if (bytes.size() < 30) return {};
  const auto height = static_cast<std::int32_t>(little_endian_32(bytes, 22));  // negative: top down
  return {little_endian_32(bytes, 18), std::abs(std::int64_t{height}),
          little_endian_16(bytes, 28) > 8 ? 3 : 1, 8};
}

// Numbers after "P5", over blanks and comments.
PageShape pnm_shape(Bytes bytes) {
  std::int64_t numbers[3] = {0, 0, 255};
  std::size_t at = 2;
  const auto character = [&] {
    return at < bytes.size() ? std::to_integer<unsigned char>(bytes[at]) : 0;
  };
  const char kind = static_cast<char>(bytes[1]);
  const int wanted = kind == '1' || kind == '4' ? 2 : 3;
  for (int i = 0; i < wanted; ++i) {
    while (std::isspace(character()) != 0 || character() == '#') {
      const bool comment = character() == '#';
      while (comment && at < bytes.size() && character() != '\n') ++at;
      ++at;
    }
    if (std::isdigit(character()) == 0) return {};
    numbers[i] = 0;
    for (; std::isdigit(character()) != 0 && numbers[i] < (std::int64_t{1} << 40); ++at) {
      numbers[i] = 10 * numbers[i] + (character() - '0');
    }
  }
  return {numbers[0], numbers[1], kind == '3' || kind == '6' ? 3 : 1, numbers[2] > 255 ? 16 : 8};
}

// The start of frame (SOF0..SOF15 without DHT, JPG and DAC) after any other segments.
PageShape jpeg_shape(Bytes bytes) {
  for (std::size_t at = 2; at + 10 < bytes.size();) {
    const auto marker = big_endian_16(bytes, at);
    if (marker < 0xFF01) return {};
    const bool frame = marker >= 0xFFC0 && marker <= 0xFFCF && marker != 0xFFC4 &&
                       marker != 0xFFC8 && marker != 0xFFCC;
    if (frame) {
      return {big_endian_16(bytes, at + 7), big_endian_16(bytes, at + 5),
              std::to_integer<int>(bytes[at + 9]) >= 3 ? 3 : 1, 8};
    }
    at += marker == 0xFFFF ? 1 : 2 + big_endian_16(bytes, at + 2);
  }
  return {};
}

}  // namespace

PageShape page_shape(const std::filesystem::path& path, int page, const ReadLimits& limits) {
  const FileType type = file_type(path);
  if (type == FileType::kTiff) return tiff_page_shape(path, page, limits);
  check_page(path, page, 1);
  const std::vector<std::byte> bytes = read_start(path, kHeaderBytes);
  switch (type) {
    case FileType::kPng:
      return png_shape(bytes);
    case FileType::kBmp:
      return bmp_shape(bytes);
    case FileType::kPnm:
      return pnm_shape(bytes);
    case FileType::kJpeg:
      return jpeg_shape(bytes);
    case FileType::kTiff:
      break;
  }
  return {};
}

}  // namespace stillfield
