#include <optional>

#include "image/input_checks.h"
#include "image/raster_header.h"

namespace stillfield {
namespace {

using std::string_view_literals::operator""sv;

constexpr unsigned kStartOfScan = 0xda;
constexpr unsigned kEndOfImage = 0xd9;
constexpr unsigned kJfif = 0xe0;

// Frame headers SOF0 .. SOF15; C4, C8 and CC are tables and extensions.
bool is_frame(unsigned marker) {
  return marker >= 0xc0 && marker <= 0xcf && marker != 0xc4 && marker != 0xc8 && marker != 0xcc;
}

// Baseline, extended and progressive, with Huffman or arithmetic coding.
bool is_supported_frame(unsigned marker) {
  return marker <= 0xc2 || marker == 0xc9 || marker == 0xca;
}

bool has_no_length(unsigned marker) {
  return marker == 0x01 || (marker >= 0xd0 && marker <= 0xd8);
}

// Position of the next marker's code byte at or after `at`; stuffed zeros, restart markers and
// fill bytes inside coded data are passed over. Throws at the end of the file.
std::size_t next_marker(const std::filesystem::path& file, Bytes bytes, std::size_t at) {
  for (; at + 1 < bytes.size(); ++at) {
    if (bytes[at] != std::byte{0xff}) continue;
    const auto code = std::to_integer<unsigned>(bytes[at + 1]);
    if (code != 0 && code != 0xff && !(code >= 0xd0 && code <= 0xd7)) return at + 1;
  }
  throw_truncated(file, "before the JPEG end marker");
}

RasterHeader parse_frame(const std::filesystem::path& file, unsigned marker, Bytes segment,
                         const ReadLimits& limits) {
  if (segment.size() < 8) {
    throw_input(file, std::string("the JPEG frame header is damaged") + kCopyAgain);
  }
  RasterHeader header;
  header.bits = std::to_integer<int>(segment[2]);
  header.height = big_endian_16(segment, 3);
  header.width = big_endian_16(segment, 5);
  header.channels = std::to_integer<int>(segment[7]);
  check_size(file, header.width, header.height, limits);
  if (!is_supported_frame(marker) || header.bits != 8) {
    throw_input(file, "is a lossless, hierarchical or " + std::to_string(header.bits) +
                          "-bit JPEG, which cannot be read; save it as TIFF or PNG");
  }
  if (header.channels != 1 && header.channels != 3) {
    throw_input(file, "is a JPEG with " + std::to_string(header.channels) +
                          " channels (printing inks); save it as grey or RGB");
  }
  return header;
}

// Of the JFIF segment (ISO/IEC 10918-5), which follows its length at the start of `segment`.
PixelSize jfif_density(Bytes segment) {
  if (segment.size() < 14 || !has_text(segment, 2, "JFIF\0"sv)) return {};
  const auto unit = std::to_integer<int>(segment[9]);
  const double um = unit == 1 ? kUmPerInch : unit == 2 ? kUmPerCentimetre : 0;
  return pixel_size_from_resolution(big_endian_16(segment, 10), big_endian_16(segment, 12), um);
}

// No picture takes fewer bytes: every 8 x 8 block of luminance has a code of at least a bit, and a
// component may be sampled 4 x 4 times more coarsely than the picture. Arithmetic codes may be
// shorter, so they are not checked.
bool too_short(const RasterHeader& header, unsigned frame, Bytes bytes) {
  const std::int64_t least = header.width * header.height / (64 * 16 * 8);
  return frame <= 0xc2 && static_cast<std::int64_t>(bytes.size()) < least;
}

}  // namespace

RasterHeader check_jpeg(const std::filesystem::path& file, Bytes bytes, const ReadLimits& limits) {
  std::optional<RasterHeader> header;
  PixelSize density;
  unsigned frame = 0;
  bool has_scan = false;
  std::size_t at = 2;
  while (true) {
    at = next_marker(file, bytes, at);
    const auto marker = std::to_integer<unsigned>(bytes[at++]);
    if (marker == kEndOfImage) break;
    if (has_no_length(marker)) continue;
    if (bytes.size() - at < 2) throw_truncated(file, "inside a JPEG segment");
    const std::size_t length = big_endian_16(bytes, at);
    if (length > bytes.size() - at) throw_truncated(file, "inside a JPEG segment");
    if (is_frame(marker) && !header) {
      header = parse_frame(file, marker, bytes.subspan(at, length), limits);
      frame = marker;
    }
    if (marker == kJfif && !density.um) density = jfif_density(bytes.subspan(at, length));
    has_scan |= marker == kStartOfScan;
    at += length;
  }
  if (!header || !has_scan) {
    throw_input(file, std::string("the JPEG holds no picture before its end marker") + kCopyAgain);
  }
  if (too_short(*header, frame, bytes)) {
    throw_input(file, std::string("the JPEG holds less data than its header claims") + kCopyAgain);
  }
  header->pixel_size = density;
  return *header;
}

}  // namespace stillfield
