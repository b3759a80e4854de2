// TIFF files written with libtiff alone, as an independent writer for the reader's tests.
#ifndef STILLFIELD_TESTS_IMAGE_TIFF_MAKER_H_
#define STILLFIELD_TESTS_IMAGE_TIFF_MAKER_H_

#include <tiffio.h>

#include <filesystem>
#include <vector>

#include "patterns.h"

namespace stillfield::test {

struct TiffRecipe {
  int width = 50;
  int height = 37;
  int channels = 1;
  int photometric = PHOTOMETRIC_MINISBLACK;
  int compression = COMPRESSION_NONE;
  int predictor = PREDICTOR_NONE;
  int tile = 0;  // side of a tile; 0 = strips
  int rows_per_strip = 5;
  bool separate = false;  // one plane a channel
  const char* mode = "w";
};

// Appends one page of T to `tiff`; value(x, y, c) gives the samples.
template <typename T, typename Value>
void add_page(TIFF* tiff, const TiffRecipe& r, int sample_format, Value value) {
  TIFFSetField(tiff, TIFFTAG_IMAGEWIDTH, r.width);
  TIFFSetField(tiff, TIFFTAG_IMAGELENGTH, r.height);
  TIFFSetField(tiff, TIFFTAG_BITSPERSAMPLE, static_cast<int>(8 * sizeof(T)));
  TIFFSetField(tiff, TIFFTAG_SAMPLESPERPIXEL, r.channels);
  TIFFSetField(tiff, TIFFTAG_SAMPLEFORMAT, sample_format);
  TIFFSetField(tiff, TIFFTAG_PHOTOMETRIC, r.photometric);
  TIFFSetField(tiff, TIFFTAG_PLANARCONFIG,
               r.separate ? PLANARCONFIG_SEPARATE : PLANARCONFIG_CONTIG);
  TIFFSetField(tiff, TIFFTAG_COMPRESSION, r.compression);
  if (r.predictor != PREDICTOR_NONE) TIFFSetField(tiff, TIFFTAG_PREDICTOR, r.predictor);
  if (r.tile > 0) {
    TIFFSetField(tiff, TIFFTAG_TILEWIDTH, r.tile);
    TIFFSetField(tiff, TIFFTAG_TILELENGTH, r.tile);
  } else {
    TIFFSetField(tiff, TIFFTAG_ROWSPERSTRIP, r.rows_per_strip);
  }
  const int block_width = r.tile > 0 ? r.tile : r.width;
  const int block_height = r.tile > 0 ? r.tile : r.rows_per_strip;
  const int samples = r.separate ? 1 : r.channels;
  std::uint32_t block = 0;
  for (int plane = 0; plane < (r.separate ? r.channels : 1); ++plane) {
    for (int y0 = 0; y0 < r.height; y0 += block_height) {
      for (int x0 = 0; x0 < r.width; x0 += block_width) {
        std::vector<T> data;
        const int rows = r.tile > 0 ? r.tile : std::min(block_height, r.height - y0);
        for (int y = y0; y < y0 + rows; ++y) {
          for (int x = x0; x < x0 + block_width; ++x) {
            for (int c = 0; c < samples; ++c) data.push_back(value(x, y, plane + c));
          }
        }
        const auto size = static_cast<tmsize_t>(data.size() * sizeof(T));
        r.tile > 0 ? TIFFWriteEncodedTile(tiff, block++, data.data(), size)
                   : TIFFWriteEncodedStrip(tiff, block++, data.data(), size);
      }
    }
  }
  TIFFWriteDirectory(tiff);
}

template <typename T, typename Value>
void make_tiff(const std::filesystem::path& file, const TiffRecipe& recipe, int sample_format,
               Value value) {
  TIFF* tiff = TIFFOpen(file.c_str(), recipe.mode);
  add_page<T>(tiff, recipe, sample_format, value);
  TIFFClose(tiff);
}

}  // namespace stillfield::test

#endif  // STILLFIELD_TESTS_IMAGE_TIFF_MAKER_H_
