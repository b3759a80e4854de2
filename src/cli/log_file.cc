#include "cli/log_file.h"

#include <fcntl.h>
#include <unistd.h>

#include <cerrno>
#include <ctime>
#include <system_error>

#include "cli/printable.h"
#include "core/error.h"

namespace stillfield {
namespace {

std::string time_stamp() {
  const std::time_t now = std::time(nullptr);
  std::tm utc{};
  ::gmtime_r(&now, &utc);
  char text[32];
  std::strftime(text, sizeof text, "%Y-%m-%dT%H:%M:%SZ", &utc);
  return text;
}

}  // namespace

LogFile::LogFile(const std::string& file) {
  if (file.empty()) return;
  descriptor_ = ::open(file.c_str(), O_WRONLY | O_CREAT | O_APPEND | O_CLOEXEC, 0666);
  if (descriptor_ < 0) {
    throw Error(ErrorKind::kOutput, file + ": the log cannot be written (" +
                                        std::generic_category().message(errno) +
                                        "); name a file in a folder that is there");
  }
}

LogFile::~LogFile() {
  if (descriptor_ >= 0) ::close(descriptor_);
}

void LogFile::line(const std::string& text) {
  if (descriptor_ < 0) return;
  const std::string whole = time_stamp() + " " + printable(text) + "\n";
  const ssize_t written = ::write(descriptor_, whole.data(), whole.size());
  failed_ |= written != static_cast<ssize_t>(whole.size());
}

}  // namespace stillfield
