#include "image/file_stamp.h"

#include <sys/stat.h>

#include "image/file_bytes.h"

namespace stillfield {
namespace {

std::int64_t nanoseconds(const timespec& time) {
  return std::int64_t{time.tv_sec} * 1'000'000'000 + time.tv_nsec;
}

}  // namespace

FileStamp stamp_of(const std::filesystem::path& file) {
  struct stat status {};
  if (::stat(file.c_str(), &status) != 0) return {};
  return {status.st_dev, status.st_ino, status.st_size, nanoseconds(status.st_mtim),
          nanoseconds(status.st_ctim)};
}

void check_unchanged(const std::filesystem::path& file, const FileStamp& before) {
  const FileStamp now = stamp_of(file);
  if (now == before) return;
  throw_input(file, now.bytes < 0 ? "the file vanished while it was read; put it back, or leave it "
                                    "out"
                                  : "the file changed while it was read; run again when it is "
                                    "complete");
}

}  // namespace stillfield
