#include "image/tiff_layout.h"

#include <algorithm>
#include <limits>

#include "image/file_bytes.h"
#include "image/input_checks.h"

namespace stillfield {
namespace {

template <typename T>
T tag(TIFF* tiff, std::uint32_t which, T otherwise) {
  T value = otherwise;
  return TIFFGetFieldDefaulted(tiff, which, &value) == 1 ? value : otherwise;
}

void read_format(const std::filesystem::path& file, TIFF* tiff, TiffLayout& layout) {
  const auto kind = tag<std::uint16_t>(tiff, TIFFTAG_SAMPLEFORMAT, SAMPLEFORMAT_UINT);
  const int bits = tag<std::uint16_t>(tiff, TIFFTAG_BITSPERSAMPLE, 1);
  const bool whole_bytes = bits == 8 || bits == 16 || bits == 32;
  bool supported = false;
  switch (kind) {
    case SAMPLEFORMAT_UINT:
    case SAMPLEFORMAT_VOID:  // undefined: read as unsigned, which TIFF 6.0 allows
      layout.format = {SampleKind::kUnsigned, bits};
      supported = whole_bytes || (bits >= 1 && bits <= 16);
      break;
    case SAMPLEFORMAT_INT:
      layout.format = {SampleKind::kSigned, bits};
      supported = whole_bytes;
      break;
    case SAMPLEFORMAT_IEEEFP:
      layout.format = {SampleKind::kFloat, bits};
      supported = bits == 32 || bits == 64;
      break;
    default:
      break;
  }
  if (!supported) {
    throw_input(file, "TIFF samples of format " + std::to_string(kind) + " with " +
                          std::to_string(bits) +
                          " bits cannot be read; save it with 8 or 16 bits or as 32-bit float");
  }
}

void read_channels(const std::filesystem::path& file, TIFF* tiff, TiffLayout& layout) {
  layout.channels = tag<std::uint16_t>(tiff, TIFFTAG_SAMPLESPERPIXEL, 1);
  layout.separate =
      tag<std::uint16_t>(tiff, TIFFTAG_PLANARCONFIG, PLANARCONFIG_CONTIG) == PLANARCONFIG_SEPARATE;
  std::uint16_t photometric = layout.channels >= 3 ? PHOTOMETRIC_RGB : PHOTOMETRIC_MINISBLACK;
  TIFFGetField(tiff, TIFFTAG_PHOTOMETRIC, &photometric);
  const auto compression = tag<std::uint16_t>(tiff, TIFFTAG_COMPRESSION, COMPRESSION_NONE);
  const bool jpeg_colour = photometric == PHOTOMETRIC_YCBCR && compression == COMPRESSION_JPEG;
  if (jpeg_colour) TIFFSetField(tiff, TIFFTAG_JPEGCOLORMODE, JPEGCOLORMODE_RGB);

  layout.colour = photometric == PHOTOMETRIC_RGB || jpeg_colour;
  layout.palette = photometric == PHOTOMETRIC_PALETTE;
  layout.inverted = photometric == PHOTOMETRIC_MINISWHITE;
  const bool grey = layout.inverted || photometric == PHOTOMETRIC_MINISBLACK;
  if (!layout.colour && !layout.palette && !grey) {
    throw_input(file, "TIFF colour model " + std::to_string(photometric) +
                          " cannot be read; save it as grey or RGB");
  }
  const bool fractional = layout.format.kind != SampleKind::kUnsigned || layout.format.bits > 16;
  if ((layout.inverted || layout.palette) && fractional) {
    throw_input(file,
                "a TIFF whose zero is white, or with a palette, can be read with unsigned "
                "samples of up to 16 bits only; save it as plain grey");
  }

  const int used = layout.colour ? 3 : 1;
  const int extra = layout.channels - used;
  std::uint16_t extra_count = 0;
  std::uint16_t* extra_kinds = nullptr;
  TIFFGetFieldDefaulted(tiff, TIFFTAG_EXTRASAMPLES, &extra_count, &extra_kinds);
  const bool is_alpha = extra == 1 && (layout.colour || (extra_count == 1 && extra_kinds[0] != 0));
  if (extra != 0 && !is_alpha) {
    throw_input(file,
                "has " + std::to_string(layout.channels) +
                    " channels that are not grey or RGB; save each channel as a page or file");
  }
  layout.alpha = is_alpha;
}

void read_blocks(const std::filesystem::path& file, TIFF* tiff, const ReadLimits& limits,
                 TiffLayout& layout) {
  layout.tiled = TIFFIsTiled(tiff) != 0;
  if (layout.tiled) {
    layout.block_width = tag<std::uint32_t>(tiff, TIFFTAG_TILEWIDTH, 0);
    layout.block_height = tag<std::uint32_t>(tiff, TIFFTAG_TILELENGTH, 0);
    check_size(file, layout.block_width, layout.block_height, limits);
    // With the padding of the last tiles: bounds every product below.
    const auto padded = [](std::int64_t size, std::int64_t block) {
      return (size + block - 1) / block * block;
    };
    check_size(file, padded(layout.width, layout.block_width),
               padded(layout.height, layout.block_height), limits);
  } else {
    layout.block_width = layout.width;
    const auto rows = tag<std::uint32_t>(tiff, TIFFTAG_ROWSPERSTRIP, 0xffffffffu);
    layout.block_height = std::clamp<std::int64_t>(rows, 1, layout.height);
  }
}

// Most bytes one stored byte can stand for, rounded up generously; 0 = no bound is known.
std::int64_t max_ratio(std::uint16_t compression) {
  switch (compression) {
    case COMPRESSION_NONE:
      return 1;
    case COMPRESSION_PACKBITS:
      return 64;                     // 128 bytes from 2
    case COMPRESSION_ADOBE_DEFLATE:  // 1032, zlib technical details
    case COMPRESSION_DEFLATE:
    case COMPRESSION_LZW:
      return 4096;  // a 12-bit code stands for at most 4096 bytes
    default:
      return 0;
  }
}

void check_data(const std::filesystem::path& file, TIFF* tiff, const TiffLayout& layout) {
  const auto file_size = static_cast<std::uint64_t>(InputHandle(file).size());
  const std::uint32_t blocks = layout.tiled ? TIFFNumberOfTiles(tiff) : TIFFNumberOfStrips(tiff);
  const std::int64_t across = (layout.width + layout.block_width - 1) / layout.block_width;
  const std::int64_t down = (layout.height + layout.block_height - 1) / layout.block_height;
  if (blocks < across * down * (layout.separate ? layout.channels : 1)) {
    throw_input(file, std::string("the TIFF has fewer strips or tiles than its size asks for") +
                          kCopyAgain);
  }
  const auto ratio = max_ratio(tag<std::uint16_t>(tiff, TIFFTAG_COMPRESSION, COMPRESSION_NONE));
  std::int64_t stored = 0;
  for (std::uint32_t block = 0; block < blocks; ++block) {
    int failed = 0;
    const std::uint64_t offset = TIFFGetStrileOffsetWithErr(tiff, block, &failed);
    const std::uint64_t count = TIFFGetStrileByteCountWithErr(tiff, block, &failed);
    if (failed != 0 || count == 0) {
      throw_input(file, "strip or tile " + std::to_string(block + 1) + " of the TIFF is missing" +
                            kCopyAgain);
    }
    if (offset > file_size || count > file_size - offset) {
      throw_truncated(file, "before the end of strip or tile " + std::to_string(block + 1));
    }
    stored += static_cast<std::int64_t>(count);
  }
  const std::int64_t rows = layout.tiled ? down * layout.block_height : layout.height;
  const std::int64_t claimed =
      layout.row_bytes() * rows * across * (layout.separate ? layout.channels : 1);
  if (ratio != 0 && claimed / ratio > stored) {
    throw_input(file, std::string("the TIFF holds less data than its header claims") + kCopyAgain);
  }
}

}  // namespace

TiffLayout tiff_layout(const std::filesystem::path& file, TiffHandle& tiff,
                       const ReadLimits& limits) {
  TiffLayout layout;
  layout.width = tag<std::uint32_t>(tiff.get(), TIFFTAG_IMAGEWIDTH, 0);
  layout.height = tag<std::uint32_t>(tiff.get(), TIFFTAG_IMAGELENGTH, 0);
  check_size(file, layout.width, layout.height, limits);
  if (std::max(layout.width, layout.height) > std::numeric_limits<int>::max()) {
    throw_input(file, "a side of the TIFF is longer than 2147483647 pixels; cut it into parts");
  }
  read_format(file, tiff.get(), layout);
  read_channels(file, tiff.get(), layout);
  read_blocks(file, tiff.get(), limits, layout);
  check_data(file, tiff.get(), layout);
  return layout;
}

PixelSize tiff_pixel_size(TIFF* tiff) {
  float x = 0;
  float y = 0;
  if (TIFFGetField(tiff, TIFFTAG_XRESOLUTION, &x) != 1) return {};
  if (TIFFGetField(tiff, TIFFTAG_YRESOLUTION, &y) != 1) return {};
  const auto unit = tag<std::uint16_t>(tiff, TIFFTAG_RESOLUTIONUNIT, RESUNIT_INCH);
  const double um_per_unit = unit == RESUNIT_INCH         ? kUmPerInch
                             : unit == RESUNIT_CENTIMETER ? kUmPerCentimetre
                                                          : 0;
  return pixel_size_from_resolution(x, y, um_per_unit);
}

}  // namespace stillfield
