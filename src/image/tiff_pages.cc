#include "image/tiff_pages.h"

#include "image/file_bytes.h"
#include "image/input_checks.h"

namespace stillfield {
namespace {

bool is_page(TIFF* tiff) {
  std::uint32_t kind = 0;
  if (TIFFGetField(tiff, TIFFTAG_SUBFILETYPE, &kind) == 1) {
    return (kind & (FILETYPE_REDUCEDIMAGE | FILETYPE_MASK)) == 0;
  }
  std::uint16_t old_kind = OFILETYPE_IMAGE;
  return TIFFGetField(tiff, TIFFTAG_OSUBFILETYPE, &old_kind) != 1 ||
         old_kind != OFILETYPE_REDUCEDIMAGE;
}

}  // namespace

std::vector<TiffPagePlace> tiff_pages(const std::filesystem::path& file, TiffHandle& tiff,
                                      const ReadLimits& limits, std::size_t enough) {
  std::vector<TiffPagePlace> pages;
  int directory = 0;
  do {
    if (directory == limits.max_pages) {
      throw_input(file, "the TIFF has more than the limit of " + std::to_string(limits.max_pages) +
                            " pages; check the file, or split it");
    }
    if (is_page(tiff.get())) pages.push_back({TIFFCurrentDirOffset(tiff.get()), directory});
    if (pages.size() == enough) return pages;
    tiff.forget_messages();
    ++directory;
  } while (TIFFReadDirectory(tiff.get()) == 1);
  if (!tiff.first_error().empty()) {
    throw_input(file, "a TIFF directory cannot be read (" + tiff.first_error() + ")" + kCopyAgain);
  }
  if (pages.empty()) {
    throw_input(file, "the TIFF holds reduced copies or masks only; save the full image");
  }
  return pages;
}

OmeFile tiff_ome(const std::filesystem::path& file, const TiffHandle& tiff,
                 const ReadLimits& limits) {
  const char* description = nullptr;
  const bool there = TIFFGetField(tiff.get(), TIFFTAG_IMAGEDESCRIPTION, &description) == 1;
  if (!there || description == nullptr || !is_ome_xml(description)) return {};
  return parse_ome(description, file.filename().string(), limits.max_pages);
}

}  // namespace stillfield
