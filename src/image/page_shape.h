// What the header of a page says of its size: the start of the file is read, nothing more.
//
// Enough to know what an image will need; whether the file holds what its header says is for
// read_page() to find. Sources  as image/raster_header.h
#ifndef STILLFIELD_IMAGE_PAGE_SHAPE_H_
#define STILLFIELD_IMAGE_PAGE_SHAPE_H_

#include <cstdint>
#include <filesystem>

#include "image/read.h"

namespace stillfield {

struct PageShape {
  std::int64_t width = 0;
  std::int64_t height = 0;
  int channels = 1;  // 3 for colour, 1 for anything else
  int bits = 8;      // per sample

  std::int64_t pixels() const { return width * height; }
};

// 0 x 0 where the header cannot be made out. Throws Error(kInput) for files that cannot be opened
// or are of no known kind, and TIFF pages that are too large or of an unsupported kind.
PageShape page_shape(const std::filesystem::path& path, int page, const ReadLimits& limits);

}  // namespace stillfield

#endif  // STILLFIELD_IMAGE_PAGE_SHAPE_H_
