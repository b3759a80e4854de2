#include "image/leftovers.h"

#include <fcntl.h>
#include <sys/file.h>
#include <sys/stat.h>
#include <unistd.h>

#include <vector>

namespace stillfield {
namespace {

namespace fs = std::filesystem;

constexpr std::size_t kLongestName = 180;
constexpr std::string_view kMark = ".stillfield-";
constexpr std::string_view kEnd = ".partial";

// Takes the digits from the end of `text`; false if there are none.
bool drop_number(std::string_view& text) {
  const std::size_t last = text.find_last_not_of("0123456789");
  const std::size_t kept = last == std::string_view::npos ? 0 : last + 1;
  const bool any = kept < text.size();
  text = text.substr(0, kept);
  return any;
}

bool drop_end(std::string_view& text, std::string_view end) {
  if (!text.ends_with(end)) return false;
  text.remove_suffix(end.size());
  return true;
}

// Whether the open file is a regular one and still has this name.
bool is_named(int descriptor, const fs::path& file) {
  struct stat opened {};
  struct stat named {};
  return ::fstat(descriptor, &opened) == 0 && ::lstat(file.c_str(), &named) == 0 &&
         S_ISREG(opened.st_mode) && opened.st_dev == named.st_dev && opened.st_ino == named.st_ino;
}

bool remove_if_nobodys(const fs::path& file) {
  const int descriptor = ::open(file.c_str(), O_RDWR | O_NOFOLLOW | O_NONBLOCK | O_CLOEXEC);
  if (descriptor < 0) return false;
  const bool removed = ::flock(descriptor, LOCK_EX | LOCK_NB) == 0 && is_named(descriptor, file) &&
                       ::unlink(file.c_str()) == 0;
  ::close(descriptor);
  return removed;
}

}  // namespace

std::string partial_name(std::string_view name, long process, unsigned number) {
  std::string text = ".";
  text.append(name.substr(0, kLongestName)).append(kMark);
  text.append(std::to_string(process)).append("-").append(std::to_string(number));
  return text.append(kEnd);
}

bool is_partial_name(std::string_view name) {
  return name.starts_with('.') && drop_end(name, kEnd) && drop_number(name) &&
         drop_end(name, "-") && drop_number(name) && drop_end(name, kMark) && name.size() > 1;
}

int remove_leftovers(const fs::path& folder) {
  std::vector<fs::path> found;
  std::error_code error;
  fs::directory_iterator it(folder, error);
  for (; !error && it != fs::directory_iterator(); it.increment(error)) {
    if (is_partial_name(it->path().filename().native())) found.push_back(it->path());
  }
  int removed = 0;
  for (const fs::path& file : found) removed += remove_if_nobodys(file) ? 1 : 0;
  return removed;
}

}  // namespace stillfield
