#include "image/input_checks.h"

#include "image/file_bytes.h"

namespace stillfield {

void check_size(const std::filesystem::path& file, std::int64_t width, std::int64_t height,
                const ReadLimits& limits) {
  const std::string claim = std::to_string(width) + " x " + std::to_string(height) + " pixels";
  if (width <= 0 || height <= 0) {
    throw_input(file, "the header claims " + claim + ", which is no image" + kCopyAgain);
  }
  if (width > limits.max_pixels / height) {
    throw_input(file, "the header claims " + claim + ", more than the limit of " +
                          std::to_string(limits.max_pixels) +
                          "; check the file, or cut the image into parts");
  }
}

void check_page(const std::filesystem::path& file, int page, int pages) {
  if (page >= 0 && page < pages) return;
  throw_input(file, "there is no page " + std::to_string(page + 1) + "; ask for one from 1 to " +
                        std::to_string(pages));
}

void throw_truncated(const std::filesystem::path& file, const std::string& where) {
  throw_input(file, "the file is truncated (it ends " + where + ")" + kCopyAgain);
}

}  // namespace stillfield
