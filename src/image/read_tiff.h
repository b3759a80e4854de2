// TIFF pages through libtiff. Pages count from 0 and leave out reduced-resolution copies and masks.
#ifndef STILLFIELD_IMAGE_READ_TIFF_H_
#define STILLFIELD_IMAGE_READ_TIFF_H_

#include "image/page_shape.h"
#include "image/read.h"

namespace stillfield {

int count_tiff_pages(const std::filesystem::path& file, const ReadLimits& limits);

std::vector<OmeImage> read_tiff_ome(const std::filesystem::path& file, const ReadLimits& limits);

PageShape tiff_page_shape(const std::filesystem::path& file, int page, const ReadLimits& limits);

Field read_tiff_page(const std::filesystem::path& file, int page, const ReadLimits& limits,
                     ColourMode colour);

}  // namespace stillfield

#endif  // STILLFIELD_IMAGE_READ_TIFF_H_
