// A file that appears complete or not at all.
//
// Writing goes to a hidden temporary name in the same folder (image/leftovers.h), which is locked
// as long as the writer lives; commit() brings it to the disk (fsync) and renames it, which POSIX
// makes atomic. Without commit() the destructor removes the temporary. Missing parent folders are
// made.
// Errors   Error(kOutput), one sentence: file, what is wrong, what to do
// Source   IEEE Std 1003.1-2017, rename(); Linux flock(2)
#ifndef STILLFIELD_IMAGE_ATOMIC_FILE_H_
#define STILLFIELD_IMAGE_ATOMIC_FILE_H_

#include <cstddef>
#include <filesystem>
#include <span>
#include <string>
#include <string_view>

namespace stillfield {

class AtomicFile {
 public:
  explicit AtomicFile(std::filesystem::path target);
  ~AtomicFile();
  AtomicFile(const AtomicFile&) = delete;
  AtomicFile& operator=(const AtomicFile&) = delete;

  void write(std::span<const std::byte> bytes);
  void write(std::string_view text);

  // For libraries that write to a descriptor; it stays this object's.
  int descriptor() const { return descriptor_; }
  const std::filesystem::path& temporary() const { return temporary_; }

  void commit();

  // Leaves a file alone that holds the same bytes already.
  void commit_if_changed();

 private:
  void make_temporary();
  void release();
  [[noreturn]] void fail(const std::string& what, int error) const;

  std::filesystem::path target_;
  std::filesystem::path temporary_;
  int descriptor_ = -1;
  int lock_ = -1;  // a second handle on the same open file: keeps the lock until after the rename
};

void write_text_atomically(const std::filesystem::path& path, std::string_view text);
void write_bytes_atomically(const std::filesystem::path& path, std::span<const std::byte> bytes);

}  // namespace stillfield

#endif  // STILLFIELD_IMAGE_ATOMIC_FILE_H_
