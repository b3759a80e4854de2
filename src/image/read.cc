#include "image/read.h"

#include "image/file_type.h"
#include "image/input_checks.h"
#include "image/read_opencv.h"
#include "image/read_tiff.h"

namespace stillfield {

int count_pages(const std::filesystem::path& path, const ReadLimits& limits) {
  return file_type(path) == FileType::kTiff ? count_tiff_pages(path, limits) : 1;
}

std::vector<OmeImage> read_ome(const std::filesystem::path& path, const ReadLimits& limits) {
  if (file_type(path) != FileType::kTiff) return {};
  return read_tiff_ome(path, limits);
}

Field read_page(const std::filesystem::path& path, int page, const ReadLimits& limits,
                ColourMode colour) {
  const FileType type = file_type(path);
  if (type == FileType::kTiff) return read_tiff_page(path, page, limits, colour);
  check_page(path, page, 1);
  return read_opencv(path, type, limits, colour);
}

}  // namespace stillfield
