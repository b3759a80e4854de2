#include <array>
#include <cctype>

#include "image/input_checks.h"
#include "image/raster_header.h"

namespace stillfield {
namespace {

using std::string_view_literals::operator""sv;

constexpr auto kSignature = "\x89PNG\r\n\x1a\n"sv;
constexpr std::int64_t kMaxSide = 1000000;       // libpng's own limit
constexpr std::int64_t kMaxDeflateRatio = 1032;  // zlib technical details: 258 bytes from 2 bits

// CRC-32 of ISO 3309, as in annex D of the PNG specification.
std::uint32_t crc32(Bytes bytes) {
  static const auto table = [] {
    std::array<std::uint32_t, 256> t{};
    for (std::uint32_t n = 0; n < 256; ++n) {
      t[n] = n;
      for (int k = 0; k < 8; ++k) t[n] = (t[n] & 1 ? 0xedb88320u : 0u) ^ (t[n] >> 1);
    }
    return t;
  }();
  std::uint32_t crc = 0xffffffffu;
  for (const std::byte b : bytes) {
    crc = table[(crc ^ std::to_integer<std::uint32_t>(b)) & 0xff] ^ (crc >> 8);
  }
  return ~crc;
}

struct Chunk {
  std::string_view type;
  Bytes data;
  Bytes whole;  // length, type, data and CRC
  bool crc_ok;
};

// The chunk at `at`; throws if the file ends inside it.
Chunk chunk_at(const std::filesystem::path& file, Bytes bytes, std::size_t at) {
  if (bytes.size() - at < 12) throw_truncated(file, "before the PNG end chunk");
  const std::size_t length = big_endian_32(bytes, at);
  const std::string_view type(reinterpret_cast<const char*>(bytes.data()) + at + 4, 4);
  for (const char c : type) {
    if (!std::isalpha(static_cast<unsigned char>(c))) {
      throw_input(file, std::string("the PNG structure is damaged") + kCopyAgain);
    }
  }
  if (length > bytes.size() - at - 12) {
    throw_truncated(file, "inside PNG chunk " + std::string(type));
  }
  const bool crc_ok =
      crc32(bytes.subspan(at + 4, length + 4)) == big_endian_32(bytes, at + 8 + length);
  return {type, bytes.subspan(at + 8, length), bytes.subspan(at, length + 12), crc_ok};
}

bool valid_depth(unsigned colour_type, unsigned bits) {
  switch (colour_type) {
    case 0:
      return bits == 1 || bits == 2 || bits == 4 || bits == 8 || bits == 16;
    case 3:
      return bits == 1 || bits == 2 || bits == 4 || bits == 8;
    case 2:
    case 4:
    case 6:
      return bits == 8 || bits == 16;
    default:
      return false;
  }
}

RasterHeader parse_header(const std::filesystem::path& file, const Chunk& chunk,
                          const ReadLimits& limits) {
  if (chunk.type != "IHDR" || chunk.data.size() != 13 || !chunk.crc_ok) {
    throw_input(file, std::string("the PNG header is damaged") + kCopyAgain);
  }
  RasterHeader header;
  header.width = big_endian_32(chunk.data, 0);
  header.height = big_endian_32(chunk.data, 4);
  const auto bits = std::to_integer<unsigned>(chunk.data[8]);
  const auto colour_type = std::to_integer<unsigned>(chunk.data[9]);
  if (!valid_depth(colour_type, bits)) {
    throw_input(file, "PNG colour type " + std::to_string(colour_type) + " with " +
                          std::to_string(bits) + " bits does not exist" + kCopyAgain);
  }
  constexpr int kChannels[] = {1, 0, 3, 1, 2, 0, 4};
  header.channels = kChannels[colour_type];
  header.bits = static_cast<int>(bits);
  header.palette = colour_type == 3;
  header.alpha = colour_type >= 4;
  if (colour_type == 0 && bits < 8) header.spread = 255 / ((1 << bits) - 1);
  check_size(file, header.width, header.height, limits);
  if (header.width > kMaxSide || header.height > kMaxSide) {
    throw_input(file, "a PNG side of more than 1000000 pixels cannot be read; save it as TIFF");
  }
  return header;
}

// A damaged one says nothing, as with other chunks that do not decide the pixels.
PixelSize physical_size(const Chunk& chunk) {
  constexpr auto kMetre = std::byte{1};
  if (chunk.data.size() != 9 || !chunk.crc_ok || chunk.data[8] != kMetre) return {};
  return pixel_size_from_resolution(big_endian_32(chunk.data, 0), big_endian_32(chunk.data, 4),
                                    kUmPerMetre);
}

}  // namespace

RasterHeader check_png(const std::filesystem::path& file, Bytes bytes, const ReadLimits& limits,
                       std::vector<std::byte>& critical) {
  if (bytes.size() < kSignature.size()) throw_truncated(file, "inside the PNG signature");
  if (!has_text(bytes, 0, kSignature)) {
    throw_input(file, std::string("the PNG signature is damaged, as by a transfer in text mode") +
                          kCopyAgain);
  }
  const auto keep = [&critical](Bytes part) {
    critical.insert(critical.end(), part.begin(), part.end());
  };
  std::size_t at = kSignature.size();
  Chunk chunk = chunk_at(file, bytes, at);
  RasterHeader header = parse_header(file, chunk, limits);
  keep(bytes.first(at + chunk.whole.size()));

  std::int64_t compressed = 0;
  bool has_palette = false;
  do {
    at += chunk.whole.size();
    chunk = chunk_at(file, bytes, at);
    if (chunk.type == "pHYs") header.pixel_size = physical_size(chunk);
    const bool is_data = chunk.type == "IDAT";
    const bool is_palette = chunk.type == "PLTE" && header.palette;
    if (!is_data && !is_palette && chunk.type != "IEND") continue;
    if (!chunk.crc_ok) {
      throw_input(
          file, "the checksum of PNG chunk " + std::string(chunk.type) + " is wrong" + kCopyAgain);
    }
    if (is_data) compressed += static_cast<std::int64_t>(chunk.data.size());
    has_palette |= is_palette;
    keep(chunk.whole);
  } while (chunk.type != "IEND");

  const std::int64_t raw = (header.width * header.channels * header.bits + 7) / 8 * header.height;
  if (compressed == 0 || raw > kMaxDeflateRatio * compressed || (header.palette && !has_palette)) {
    throw_input(file, std::string("the PNG holds less data than its header claims") + kCopyAgain);
  }
  return header;
}

}  // namespace stillfield
