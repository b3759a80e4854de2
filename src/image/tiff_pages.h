// The pages of a TIFF: its chain of directories without reduced-resolution copies and masks.
#ifndef STILLFIELD_IMAGE_TIFF_PAGES_H_
#define STILLFIELD_IMAGE_TIFF_PAGES_H_

#include <cstdint>
#include <filesystem>
#include <vector>

#include "image/ome.h"
#include "image/read.h"
#include "image/tiff_handle.h"

namespace stillfield {

struct TiffPagePlace {
  std::uint64_t offset = 0;  // of the directory in the file
  int directory = 0;         // its number in the chain, from 0
};

// The first `enough` pages, or all there are if fewer; `tiff` stands at its first directory. Throws
// Error(kInput) if a directory cannot be read, the chain is longer than limits.max_pages, or there
// is no page. libtiff refuses chains that come back to where they were.
std::vector<TiffPagePlace> tiff_pages(const std::filesystem::path& file, TiffHandle& tiff,
                                      const ReadLimits& limits, std::size_t enough);

// The OME metadata of the file, `page` of its planes being directory numbers; empty if there are
// none. `tiff` stands at its first directory.
OmeFile tiff_ome(const std::filesystem::path& file, const TiffHandle& tiff,
                 const ReadLimits& limits);

}  // namespace stillfield

#endif  // STILLFIELD_IMAGE_TIFF_PAGES_H_
