#include <algorithm>
#include <bit>
#include <optional>
#include <string>

#include "image/input_checks.h"
#include "image/raster_header.h"

namespace stillfield {
namespace {

constexpr std::int64_t kMaxSide = 1 << 20;  // OpenCV's limit for a side
constexpr char kLastPixel[] = "before the last pixel of the PNM";

// Walks over white space, comments and decimal numbers.
class TextScanner {
 public:
  TextScanner(Bytes bytes, std::size_t at) : bytes_(bytes), at_(at) {}

  std::size_t position() const { return at_; }

  // Next number, or nothing at the end or at any other character. Values stop growing at 2^40.
  std::optional<std::int64_t> number() {
    skip_blanks();
    if (!is_digit()) return std::nullopt;
    std::int64_t value = 0;
    for (; is_digit(); ++at_) {
      if (value < std::int64_t{1} << 40) value = 10 * value + (current() - '0');
    }
    return value;
  }

  // Next digit of a plain bitmap, where blanks between digits are optional.
  bool digit() {
    skip_blanks();
    if (!is_digit()) return false;
    ++at_;
    return true;
  }

 private:
  char current() const { return static_cast<char>(bytes_[at_]); }
  bool is_digit() const { return at_ < bytes_.size() && current() >= '0' && current() <= '9'; }

  void skip_blanks() {
    for (; at_ < bytes_.size(); ++at_) {
      if (current() == '#') {
        while (at_ < bytes_.size() && current() != '\n') ++at_;
        if (at_ == bytes_.size()) return;
      } else if (current() != ' ' && (current() < '\t' || current() > '\r')) {
        return;
      }
    }
  }

  Bytes bytes_;
  std::size_t at_;
};

// Plain text samples as the binary kind: OpenCV stretches text samples to 8 bits, binary ones not.
std::vector<std::byte> as_binary(const std::filesystem::path& file, TextScanner scanner,
                                 const RasterHeader& header, std::int64_t largest) {
  const std::string start = (header.channels == 3 ? "P6 " : "P5 ") + std::to_string(header.width) +
                            " " + std::to_string(header.height) + " " + std::to_string(largest) +
                            "\n";
  std::vector<std::byte> out(start.size());
  std::transform(start.begin(), start.end(), out.begin(), [](char c) { return std::byte(c); });
  for (std::int64_t i = header.width * header.height * header.channels; i > 0; --i) {
    const auto sample = scanner.number();
    if (!sample) throw_truncated(file, kLastPixel);
    if (*sample > largest) {
      throw_input(
          file, "a PNM sample is above the largest value of the header" + std::string(kCopyAgain));
    }
    if (largest > 255) out.push_back(static_cast<std::byte>(*sample >> 8));
    out.push_back(static_cast<std::byte>(*sample & 0xff));
  }
  return out;
}

}  // namespace

RasterHeader check_pnm(const std::filesystem::path& file, Bytes bytes, const ReadLimits& limits,
                       std::vector<std::byte>& binary) {
  const int kind = static_cast<char>(bytes[1]) - '0';
  const bool text = kind <= 3;
  const bool bitmap = kind == 1 || kind == 4;

  TextScanner scanner(bytes, 2);
  const auto width = scanner.number();
  const auto height = scanner.number();
  const auto largest = bitmap ? std::optional<std::int64_t>(1) : scanner.number();
  if (!width || !height || !largest || *largest < 1 || *largest > 65535) {
    throw_input(file, std::string("the PNM header is damaged or cut off") + kCopyAgain);
  }
  check_size(file, *width, *height, limits);
  if (*width > kMaxSide || *height > kMaxSide) {
    throw_input(file, "a PNM side of more than 1048576 pixels cannot be read; save it as TIFF");
  }
  RasterHeader header;
  header.width = *width;
  header.height = *height;
  header.channels = kind == 3 || kind == 6 ? 3 : 1;
  header.bits = static_cast<int>(std::bit_width(static_cast<std::uint64_t>(*largest)));
  if (bitmap) header.spread = 255;

  const std::int64_t samples = *width * *height * header.channels;
  const auto first =
      static_cast<std::int64_t>(scanner.position()) + 1;  // one blank ends the header
  std::int64_t needed = bitmap ? (*width + 7) / 8 * *height : samples * (*largest > 255 ? 2 : 1);
  if (text) needed = samples;  // at least a character each
  if (needed > static_cast<std::int64_t>(bytes.size()) - first) throw_truncated(file, kLastPixel);
  if (text && bitmap) {
    TextScanner digits = scanner;
    for (std::int64_t i = 0; i < samples; ++i) {
      if (!digits.digit()) throw_truncated(file, kLastPixel);
    }
  }
  if (text && !bitmap) {
    binary = as_binary(file, scanner, header, *largest);
  } else {
    binary.assign(bytes.begin(), bytes.end());
  }
  return header;
}

}  // namespace stillfield
