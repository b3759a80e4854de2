// Whether a file is still the one it was: size, inode and the times of its last changes.
//
// An image is read once for its pixels and once for its digest; a stamp taken before and compared
// after says whether both saw the same file. Changes of the same size within one tick of the file
// system's clock (some milliseconds) are not seen.
#ifndef STILLFIELD_IMAGE_FILE_STAMP_H_
#define STILLFIELD_IMAGE_FILE_STAMP_H_

#include <cstdint>
#include <filesystem>

namespace stillfield {

struct FileStamp {
  std::uint64_t device = 0;
  std::uint64_t inode = 0;
  std::int64_t bytes = -1;  // -1: there is no file
  std::int64_t modified_ns = 0;
  std::int64_t changed_ns = 0;

  bool operator==(const FileStamp&) const = default;
};

FileStamp stamp_of(const std::filesystem::path& file);

// Throws Error(kInput) if the file has changed since, or has gone.
void check_unchanged(const std::filesystem::path& file, const FileStamp& before);

}  // namespace stillfield

#endif  // STILLFIELD_IMAGE_FILE_STAMP_H_
