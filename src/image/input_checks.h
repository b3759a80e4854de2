// Checks and error sentences shared by all formats.
#ifndef STILLFIELD_IMAGE_INPUT_CHECKS_H_
#define STILLFIELD_IMAGE_INPUT_CHECKS_H_

#include <cstdint>
#include <filesystem>
#include <string>

#include "image/read.h"

namespace stillfield {

// Throws if a side is 0, or if width x height exceeds limits.max_pixels.
void check_size(const std::filesystem::path& file, std::int64_t width, std::int64_t height,
                const ReadLimits& limits);

// Throws unless 0 <= page < pages.
void check_page(const std::filesystem::path& file, int page, int pages);

[[noreturn]] void throw_truncated(const std::filesystem::path& file, const std::string& where);

}  // namespace stillfield

#endif  // STILLFIELD_IMAGE_INPUT_CHECKS_H_
