// The kind of an image file by its first bytes.
#ifndef STILLFIELD_IMAGE_FILE_TYPE_H_
#define STILLFIELD_IMAGE_FILE_TYPE_H_

#include <filesystem>

namespace stillfield {

enum class FileType { kTiff, kPng, kJpeg, kBmp, kPnm };

// Throws Error(kInput) if the file cannot be read or is of no known kind.
FileType file_type(const std::filesystem::path& file);

}  // namespace stillfield

#endif  // STILLFIELD_IMAGE_FILE_TYPE_H_
