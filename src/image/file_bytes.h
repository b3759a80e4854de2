// A file as bytes: checks that give a clear sentence, whole-file reading, numbers out of bytes.
#ifndef STILLFIELD_IMAGE_FILE_BYTES_H_
#define STILLFIELD_IMAGE_FILE_BYTES_H_

#include <cstddef>
#include <cstdint>
#include <filesystem>
#include <span>
#include <string>
#include <string_view>
#include <vector>

namespace stillfield {

using Bytes = std::span<const std::byte>;

// Throws Error(kInput) "FILE: what".
[[noreturn]] void throw_input(const std::filesystem::path& file, const std::string& what);

// The sentence ends of errors that recur.
inline constexpr char kCopyAgain[] = "; copy it again from its source or leave it out";

// An open regular file that is not empty; anything else throws.
class InputHandle {
 public:
  explicit InputHandle(const std::filesystem::path& file);
  ~InputHandle();
  InputHandle(const InputHandle&) = delete;
  InputHandle& operator=(const InputHandle&) = delete;

  std::int64_t size() const { return size_; }

  // Reads up to buffer.size() bytes from where the last call stopped; 0 at the end of the file.
  std::size_t read(std::span<std::byte> buffer);

 private:
  std::filesystem::path file_;
  int descriptor_ = -1;
  std::int64_t size_ = 0;
};

// At most `limit` bytes from the start of the file.
std::vector<std::byte> read_start(const std::filesystem::path& file, std::size_t limit);

// The whole file; files of 2 GiB and more throw (the decoders that need this count in int).
std::vector<std::byte> read_whole(const std::filesystem::path& file);

// Unsigned numbers at `at`; the caller has checked that the bytes are there.
std::uint32_t big_endian_32(Bytes bytes, std::size_t at);
std::uint32_t big_endian_16(Bytes bytes, std::size_t at);
std::uint32_t little_endian_32(Bytes bytes, std::size_t at);
std::uint32_t little_endian_16(Bytes bytes, std::size_t at);

// Whether `bytes` has the characters of `text` at `at`.
bool has_text(Bytes bytes, std::size_t at, std::string_view text);

}  // namespace stillfield

#endif  // STILLFIELD_IMAGE_FILE_BYTES_H_
