#include "image/atomic_file.h"

#include <fcntl.h>
#include <unistd.h>

#include <atomic>
#include <cerrno>
#include <cstdio>
#include <system_error>

#include "core/error.h"

namespace stillfield {
namespace {

std::filesystem::path folder_of(const std::filesystem::path& file) {
  return file.has_parent_path() ? file.parent_path() : std::filesystem::path(".");
}

// Hidden, unique in this process, and short enough for any file system.
std::filesystem::path temporary_name(const std::filesystem::path& target) {
  static std::atomic<unsigned> count{0};
  constexpr std::size_t kLongestName = 200;
  std::string name = ".";
  name += target.filename().string().substr(0, kLongestName);
  name += ".partial-" + std::to_string(::getpid()) + "-" + std::to_string(count.fetch_add(1));
  return folder_of(target) / name;
}

std::string advice(int error) {
  switch (error) {
    case ENOSPC:
    case EDQUOT:
      return "; free some space";
    case EACCES:
    case EPERM:
    case EROFS:
      return "; choose an output folder with write access";
    default:
      return "; check the output folder";
  }
}

// The directory entry reaches the disk too; not every file system can do this, so no error.
void sync_folder(const std::filesystem::path& folder) {
  const int descriptor = ::open(folder.c_str(), O_RDONLY | O_DIRECTORY | O_CLOEXEC);
  if (descriptor < 0) return;
  ::fsync(descriptor);
  ::close(descriptor);
}

}  // namespace

AtomicFile::AtomicFile(std::filesystem::path target)
    : target_(std::move(target)), temporary_(temporary_name(target_)) {
  if (!target_.has_filename()) fail("is no name of a file", EINVAL);
  std::error_code error;
  std::filesystem::create_directories(folder_of(target_), error);
  if (error) fail("the output folder cannot be made", error.value());
  descriptor_ = ::open(temporary_.c_str(), O_RDWR | O_CREAT | O_TRUNC | O_CLOEXEC, 0666);
  if (descriptor_ < 0) fail("the file cannot be written", errno);
}

AtomicFile::~AtomicFile() {
  if (descriptor_ >= 0) ::close(descriptor_);
  if (!temporary_.empty()) ::unlink(temporary_.c_str());
}

void AtomicFile::write(std::span<const std::byte> bytes) {
  while (!bytes.empty()) {
    const ssize_t done = ::write(descriptor_, bytes.data(), bytes.size());
    if (done >= 0) {
      bytes = bytes.subspan(static_cast<std::size_t>(done));
    } else if (errno != EINTR) {
      fail("writing failed", errno);
    }
  }
}

void AtomicFile::write(std::string_view text) {
  write(std::as_bytes(std::span(text)));
}

void AtomicFile::commit() {
  if (::fsync(descriptor_) != 0 && errno != EINVAL) fail("writing failed", errno);
  const int closed = ::close(descriptor_);
  descriptor_ = -1;
  if (closed != 0) fail("writing failed", errno);
  if (std::rename(temporary_.c_str(), target_.c_str()) != 0) {
    fail("the finished file cannot be given its name", errno);
  }
  temporary_.clear();
  sync_folder(folder_of(target_));
}

void AtomicFile::fail(const std::string& what, int error) const {
  throw Error(ErrorKind::kOutput, target_.string() + ": " + what + " (" +
                                      std::generic_category().message(error) + ")" + advice(error));
}

void write_text_atomically(const std::filesystem::path& path, std::string_view text) {
  write_bytes_atomically(path, std::as_bytes(std::span(text)));
}

void write_bytes_atomically(const std::filesystem::path& path, std::span<const std::byte> bytes) {
  AtomicFile file(path);
  file.write(bytes);
  file.commit();
}

}  // namespace stillfield
