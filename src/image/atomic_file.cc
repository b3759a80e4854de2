#include "image/atomic_file.h"

#include <fcntl.h>
#include <sys/file.h>
#include <sys/stat.h>
#include <unistd.h>

#include <algorithm>
#include <atomic>
#include <cerrno>
#include <cstdio>
#include <fstream>
#include <system_error>
#include <vector>

#include "core/error.h"
#include "image/leftovers.h"

namespace stillfield {
namespace {

std::filesystem::path folder_of(const std::filesystem::path& file) {
  return file.has_parent_path() ? file.parent_path() : std::filesystem::path(".");
}

constexpr int kMostTries = 1000;

// Of the next number in this process.
std::filesystem::path temporary_name(const std::filesystem::path& target) {
  static std::atomic<unsigned> count{0};
  return folder_of(target) /
         partial_name(target.filename().string(), ::getpid(), count.fetch_add(1));
}

// Nobody removed the file between its making and its locking.
bool still_named(int descriptor) {
  struct stat status {};
  return ::fstat(descriptor, &status) == 0 && status.st_nlink > 0;
}

bool same_content(const std::filesystem::path& a, const std::filesystem::path& b) {
  std::error_code error;
  const auto size = std::filesystem::file_size(a, error);
  if (error || std::filesystem::file_size(b, error) != size || error) return false;
  std::ifstream first(a, std::ios::binary);
  std::ifstream second(b, std::ios::binary);
  std::vector<char> one(std::size_t{1} << 16);
  std::vector<char> two(one.size());
  while (first && second) {
    first.read(one.data(), static_cast<std::streamsize>(one.size()));
    second.read(two.data(), static_cast<std::streamsize>(two.size()));
    if (first.gcount() != second.gcount() ||
        !std::equal(one.begin(), one.begin() + first.gcount(), two.begin())) {
      return false;
    }
  }
  return first.eof() && second.eof();
}

std::string advice(int error) {
  switch (error) {
    case ENOSPC:
    case EDQUOT:
      return "; free some space";
    case EFBIG:
      return "; raise the limit of file sizes (ulimit -f) or choose another disk";
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

AtomicFile::AtomicFile(std::filesystem::path target) : target_(std::move(target)) {
  if (!target_.has_filename()) fail("is no name of a file", EINVAL);
  std::error_code error;
  std::filesystem::create_directories(folder_of(target_), error);
  if (error) fail("the output folder cannot be made", error.value());
  make_temporary();
}

AtomicFile::~AtomicFile() {
  release();
}

// A file system without locks leaves the file unlocked; nobody can lock it there to remove it.
void AtomicFile::make_temporary() {
  for (int tries = 0; descriptor_ < 0; ++tries) {
    const std::filesystem::path name = temporary_name(target_);
    descriptor_ = ::open(name.c_str(), O_RDWR | O_CREAT | O_EXCL | O_CLOEXEC, 0666);
    if (descriptor_ < 0) {
      if (errno != EEXIST || tries >= kMostTries) fail("the file cannot be written", errno);
      continue;
    }
    ::flock(descriptor_, LOCK_EX | LOCK_NB);
    if (still_named(descriptor_)) {
      temporary_ = name;
    } else {
      ::close(descriptor_);
      descriptor_ = -1;
    }
  }
  lock_ = ::fcntl(descriptor_, F_DUPFD_CLOEXEC, 0);
}

void AtomicFile::release() {
  if (!temporary_.empty()) ::unlink(temporary_.c_str());
  temporary_.clear();
  for (int* descriptor : {&descriptor_, &lock_}) {
    if (*descriptor >= 0) ::close(*descriptor);
    *descriptor = -1;
  }
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
  release();
  sync_folder(folder_of(target_));
}

void AtomicFile::commit_if_changed() {
  if (same_content(temporary_, target_)) {
    release();
  } else {
    commit();
  }
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
