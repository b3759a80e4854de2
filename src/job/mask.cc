#include "job/mask.h"

#include <algorithm>
#include <cmath>
#include <utility>

#include "core/error.h"
#include "image/digest.h"

namespace stillfield {
namespace {

namespace fs = std::filesystem;

std::string size_text(const Extent& e) {
  return std::to_string(e.width) + " x " + std::to_string(e.height);
}

fs::path mask_file(const fs::path& mask, const FieldTask& task) {
  if (!fs::exists(mask)) {
    throw Error(ErrorKind::kInput,
                mask.string() + ": there is no such mask; check the spelling of the path");
  }
  if (!fs::is_directory(mask)) return mask;
  fs::path file = mask / task.relative;
  for (const char* extension : {"", ".png", ".tif"}) {
    if (*extension != '\0') file.replace_extension(extension);
    if (fs::is_regular_file(file)) return file;
  }
  throw Error(ErrorKind::kInput, "the folder of masks has no file " +
                                     (mask / task.relative).string() +
                                     "; add it, or leave the image out");
}

}  // namespace

Volume<std::uint8_t> read_mask(const fs::path& mask, const FieldTask& task, const Extent& extent,
                               const ReadLimits& limits) {
  Volume<std::uint8_t> usable(extent);
  if (mask.empty()) {
    for (int y = 0; y < extent.height; ++y) {
      std::fill_n(usable.row(y), extent.width, std::uint8_t{1});
    }
    return usable;
  }
  const fs::path file = mask_file(mask, task);
  const int page = count_pages(file) > 1 ? task.page : 0;
  const Field field = read_page(file, page, limits);
  if (!(field.pixels.extent() == extent)) {
    throw Error(ErrorKind::kInput, "its mask " + file.string() + " has " +
                                       size_text(field.pixels.extent()) + " pixels and the image " +
                                       size_text(extent) + "; give a mask of the same size");
  }
  for (int y = 0; y < extent.height; ++y) {
    for (int x = 0; x < extent.width; ++x) {
      const float m = field.pixels.at(x, y);
      usable.at(x, y) = std::isnan(m) || m == 0 ? 0 : 1;
    }
  }
  return usable;
}

MaskDigest::MaskDigest(fs::path mask) : mask_(std::move(mask)) {
  if (!mask_.empty() && !fs::is_directory(mask_)) of_file_ = sha256_of_tree(mask_);
}

std::string MaskDigest::of(const FieldTask& task) const {
  if (mask_.empty() || !of_file_.empty()) return of_file_;
  return sha256_of_file(mask_file(mask_, task));
}

}  // namespace stillfield
