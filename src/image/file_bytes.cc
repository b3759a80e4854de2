#include "image/file_bytes.h"

#include <fcntl.h>
#include <sys/stat.h>
#include <unistd.h>

#include <cerrno>
#include <cstring>
#include <limits>
#include <system_error>

#include "core/error.h"

namespace stillfield {
namespace {

std::string reason(int error) {
  return std::generic_category().message(error);
}

[[noreturn]] void throw_cannot_open(const std::filesystem::path& file, int error) {
  if (error == ENOENT || error == ENOTDIR) {
    throw_input(file, "there is no such file; check the spelling of the path");
  }
  if (error == EACCES || error == EPERM) {
    throw_input(file, "no permission to read the file; change its access rights");
  }
  throw_input(file, "the file cannot be opened (" + reason(error) + "); check the path");
}

unsigned byte_at(Bytes bytes, std::size_t at) {
  return std::to_integer<unsigned>(bytes[at]);
}

}  // namespace

void throw_input(const std::filesystem::path& file, const std::string& what) {
  throw Error(ErrorKind::kInput, file.string() + ": " + what);
}

InputHandle::InputHandle(const std::filesystem::path& file) : file_(file) {
  struct stat status {};
  if (::stat(file.c_str(), &status) != 0) throw_cannot_open(file, errno);
  if (S_ISDIR(status.st_mode)) {
    throw_input(file, "is a folder where a file is expected; name a file in it");
  }
  if (!S_ISREG(status.st_mode)) {
    throw_input(file, "is not a regular file (a pipe or a device); copy its content to a file");
  }
  if (status.st_size == 0)
    throw_input(file, std::string("the file is empty (0 bytes)") + kCopyAgain);
  size_ = status.st_size;
  descriptor_ = ::open(file.c_str(), O_RDONLY | O_CLOEXEC);
  if (descriptor_ < 0) throw_cannot_open(file, errno);
}

InputHandle::~InputHandle() {
  if (descriptor_ >= 0) ::close(descriptor_);
}

std::size_t InputHandle::read(std::span<std::byte> buffer) {
  while (true) {
    const ssize_t got = ::read(descriptor_, buffer.data(), buffer.size());
    if (got >= 0) return static_cast<std::size_t>(got);
    if (errno != EINTR) {
      throw_input(file_, "reading failed (" + reason(errno) + "); check the disk or the network");
    }
  }
}

std::vector<std::byte> read_start(const std::filesystem::path& file, std::size_t limit) {
  InputHandle input(file);
  std::vector<std::byte> bytes(std::min(limit, static_cast<std::size_t>(input.size())));
  std::size_t filled = 0;
  while (filled < bytes.size()) {
    const std::size_t got = input.read(std::span(bytes).subspan(filled));
    if (got == 0) break;
    filled += got;
  }
  bytes.resize(filled);
  return bytes;
}

std::vector<std::byte> read_whole(const std::filesystem::path& file) {
  if (InputHandle(file).size() > std::numeric_limits<int>::max()) {
    throw_input(file, "is larger than 2 GiB, too large for its format; save it as TIFF");
  }
  return read_start(file, std::numeric_limits<std::size_t>::max());
}

std::uint32_t big_endian_32(Bytes bytes, std::size_t at) {
  return big_endian_16(bytes, at) << 16 | big_endian_16(bytes, at + 2);
}

std::uint32_t big_endian_16(Bytes bytes, std::size_t at) {
  return byte_at(bytes, at) << 8 | byte_at(bytes, at + 1);
}

std::uint32_t little_endian_32(Bytes bytes, std::size_t at) {
  return little_endian_16(bytes, at) | little_endian_16(bytes, at + 2) << 16;
}

std::uint32_t little_endian_16(Bytes bytes, std::size_t at) {
  return byte_at(bytes, at) | byte_at(bytes, at + 1) << 8;
}

bool has_text(Bytes bytes, std::size_t at, std::string_view text) {
  return at <= bytes.size() && text.size() <= bytes.size() - at &&
         std::memcmp(bytes.data() + at, text.data(), text.size()) == 0;
}

}  // namespace stillfield
