// What one TIFF directory says about its pixels, checked for sense before anything is allocated.
//
// Source   TIFF Revision 6.0 (1992) and its Technical Notes 1-2; BigTIFF as documented by libtiff
// Accepts  unsigned 1-16 and 32 bits, signed 8/16/32 bits, float 32/64 bits; strips and tiles;
//          interleaved and separate planes; grey, RGB, palette; JPEG-compressed YCbCr; alpha
//          ignored
#ifndef STILLFIELD_IMAGE_TIFF_LAYOUT_H_
#define STILLFIELD_IMAGE_TIFF_LAYOUT_H_

#include <cstdint>

#include "image/pixel_size.h"
#include "image/read.h"
#include "image/tiff_handle.h"

namespace stillfield {

struct TiffLayout {
  std::int64_t width = 0;
  std::int64_t height = 0;
  SampleFormat format;
  int channels = 1;       // samples a pixel in the file
  bool colour = false;    // the first three channels are red, green, blue
  bool palette = false;   // one channel of indices into the colour map
  bool alpha = false;     // channels beyond grey or RGB are there and are not looked at
  bool inverted = false;  // 0 is white
  bool separate = false;  // one plane a channel instead of interleaved samples
  bool tiled = false;
  std::int64_t block_width = 0;   // of a tile; of a strip the image's
  std::int64_t block_height = 0;  // of a tile; of a strip its rows (the last one may have fewer)

  int samples_in_block() const { return separate ? 1 : channels; }
  std::int64_t row_bytes() const {
    return (block_width * samples_in_block() * format.bits + 7) / 8;
  }
};

// Layout of the current directory. Throws Error(kInput) if it is unsupported, too large, or if its
// data do not lie inside the file. For JPEG in YCbCr it switches the codec to RGB.
TiffLayout tiff_layout(const std::filesystem::path& file, TiffHandle& tiff,
                       const ReadLimits& limits);

// From the resolution tags, if the unit is known.
PixelSize tiff_pixel_size(TIFF* tiff);

}  // namespace stillfield

#endif  // STILLFIELD_IMAGE_TIFF_LAYOUT_H_
