// What the headers of PNG, JPEG, BMP and PNM files say, and whether the file holds all it claims.
//
// The decoders behind OpenCV may hand out half a picture when a file ends early (measured: every
// cut JPEG) and write to the terminal, so the structure is walked here first. Every function checks
// the size against `limits`, throws Error(kInput) on a damaged or unsupported file, and allocates
// no pixels. Sources  PNG: W3C Portable Network Graphics, 2nd edition, sections 5 and 11; JPEG:
// ITU-T T.81
//          annex B; PNM: Netpbm format pages pbm(5), pgm(5), ppm(5); BMP: BITMAPINFOHEADER as
//          documented by its vendor
#ifndef STILLFIELD_IMAGE_RASTER_HEADER_H_
#define STILLFIELD_IMAGE_RASTER_HEADER_H_

#include <cstdint>
#include <filesystem>
#include <vector>

#include "image/file_bytes.h"
#include "image/pixel_size.h"
#include "image/read.h"

namespace stillfield {

struct RasterHeader {
  std::int64_t width = 0;
  std::int64_t height = 0;
  int channels = 1;
  int bits = 8;          // per sample; unsigned
  bool palette = false;  // samples are indices into a table of colours
  bool alpha = false;    // the last channel is opacity
  PixelSize pixel_size;  // from the resolution, where there is one
  int spread = 1;        // OpenCV's samples are the file's times this (fewer than 8 bits)
};

RasterHeader check_jpeg(const std::filesystem::path& file, Bytes bytes, const ReadLimits& limits);
RasterHeader check_bmp(const std::filesystem::path& file, Bytes bytes, const ReadLimits& limits);

// Fills `binary` with the picture in a binary kind of PNM.
RasterHeader check_pnm(const std::filesystem::path& file, Bytes bytes, const ReadLimits& limits,
                       std::vector<std::byte>& binary);

// Fills `critical` with the chunks that decide the pixels, a complete PNG file: libpng writes its
// opinion on optional chunks to the terminal.
RasterHeader check_png(const std::filesystem::path& file, Bytes bytes, const ReadLimits& limits,
                       std::vector<std::byte>& critical);

}  // namespace stillfield

#endif  // STILLFIELD_IMAGE_RASTER_HEADER_H_
