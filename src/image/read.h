// Reading image files: TIFF and BigTIFF, PNG, JPEG, BMP, PNM (PBM, PGM, PPM).
//
// The kind of a file is decided by its first bytes, never by its name. Sizes are taken from the
// header and checked before any pixel memory is asked for.
// Colour   becomes luminance, with a note; the three planes are kept beside it when asked for; a
//          palette always becomes luminance; an alpha channel is ignored, with a note
// Size     of a pixel from OME metadata, else from resolution tags (image/pixel_size.h)
// Pages    count from 0; reduced-resolution copies and masks inside a TIFF are not pages
// Errors   Error(kInput), one sentence: file, what is wrong, what to do
// Threads  safe on different or equal files
#ifndef STILLFIELD_IMAGE_READ_H_
#define STILLFIELD_IMAGE_READ_H_

#include <cstdint>
#include <filesystem>
#include <vector>

#include "image/field.h"

namespace stillfield {

struct ReadLimits {
  std::int64_t max_pixels = std::int64_t{1} << 30;  // width x height of one page
  int max_pages = 100000;  // of one file, reduced copies and masks included
};

int count_pages(const std::filesystem::path& path, const ReadLimits& limits = {});

// What OME metadata say the pages are to each other (image/ome.h); empty if the file has none.
std::vector<OmeImage> read_ome(const std::filesystem::path& path, const ReadLimits& limits = {});

Field read_page(const std::filesystem::path& path, int page = 0, const ReadLimits& limits = {},
                ColourMode colour = ColourMode::kLuminance);

}  // namespace stillfield

#endif  // STILLFIELD_IMAGE_READ_H_
