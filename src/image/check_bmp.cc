#include "image/input_checks.h"
#include "image/raster_header.h"

namespace stillfield {
namespace {

constexpr std::int64_t kMaxSide = 1 << 20;  // OpenCV's limit for a side
constexpr std::size_t kFileHeader = 14;
constexpr std::uint32_t kCoreHeader = 12;  // the oldest variant, 16-bit sides
constexpr std::uint32_t kInfoHeader = 40;

std::int64_t signed_32(Bytes bytes, std::size_t at) {
  return static_cast<std::int32_t>(little_endian_32(bytes, at));
}

}  // namespace

RasterHeader check_bmp(const std::filesystem::path& file, Bytes bytes, const ReadLimits& limits) {
  if (bytes.size() < kFileHeader + kCoreHeader) throw_truncated(file, "inside the BMP header");
  const std::uint32_t header_size = little_endian_32(bytes, kFileHeader);
  const bool core = header_size == kCoreHeader;
  if (!core && (header_size < kInfoHeader || header_size > 1024)) {
    throw_input(file,
                std::string("the BMP header is damaged or the file is no image") + kCopyAgain);
  }
  if (bytes.size() - kFileHeader < header_size) throw_truncated(file, "inside the BMP header");

  RasterHeader header;
  header.width = core ? little_endian_16(bytes, 18) : signed_32(bytes, 18);
  header.height = core ? little_endian_16(bytes, 20) : signed_32(bytes, 22);
  if (header.height < 0) header.height = -header.height;  // rows from top to bottom
  const std::uint32_t depth = little_endian_16(bytes, core ? 24 : 28);
  const std::uint32_t compression = core ? 0 : little_endian_32(bytes, 30);
  check_size(file, header.width, header.height, limits);
  if (header.width > kMaxSide || header.height > kMaxSide) {
    throw_input(file, "a BMP side of more than 1048576 pixels cannot be read; save it as TIFF");
  }
  const bool plain = compression == 0 || compression == 3 || compression == 6;
  const bool known_depth =
      depth == 1 || depth == 4 || depth == 8 || depth == 16 || depth == 24 || depth == 32;
  if (!plain || !known_depth) {
    throw_input(file, "is a compressed or " + std::to_string(depth) +
                          "-bit BMP, which cannot be read; save it as uncompressed BMP or PNG");
  }

  const std::int64_t used = core ? 0 : little_endian_32(bytes, 46);
  const std::int64_t colours = depth > 8 ? 0 : used == 0 ? std::int64_t{1} << depth : used;
  if (colours > (std::int64_t{1} << depth)) {
    throw_input(file, std::string("the BMP palette is damaged") + kCopyAgain);
  }
  const std::int64_t palette_end = kFileHeader + header_size + colours * (core ? 3 : 4);
  if (palette_end > static_cast<std::int64_t>(bytes.size())) {
    throw_truncated(file, "inside the BMP palette");
  }
  const std::int64_t row_bytes = (header.width * depth + 31) / 32 * 4;
  const std::int64_t offset = little_endian_32(bytes, 10);
  if (offset + row_bytes * header.height > static_cast<std::int64_t>(bytes.size())) {
    throw_truncated(file, "before the last row of the BMP");
  }
  if (!core) {
    const auto across = static_cast<double>(signed_32(bytes, 38));
    const auto down = static_cast<double>(signed_32(bytes, 42));
    header.pixel_size = pixel_size_from_resolution(across, down, kUmPerMetre);
  }
  header.palette = depth <= 8;
  header.channels = header.palette ? 1 : 3;
  return header;
}

}  // namespace stillfield
