// What the process writes to its error stream while this lives, libraries included.
#ifndef STILLFIELD_TESTS_IMAGE_CAPTURED_STDERR_H_
#define STILLFIELD_TESTS_IMAGE_CAPTURED_STDERR_H_

#include <fcntl.h>
#include <unistd.h>

#include <cstdio>
#include <string>

#include "temp_folder.h"

namespace stillfield::test {

class CapturedStderr {
 public:
  CapturedStderr() : saved_(::dup(STDERR_FILENO)) {
    std::fflush(stderr);
    const int file = ::open((folder_ / "stderr").c_str(), O_WRONLY | O_CREAT | O_APPEND, 0600);
    ::dup2(file, STDERR_FILENO);
    ::close(file);
  }
  ~CapturedStderr() {
    std::fflush(stderr);
    ::dup2(saved_, STDERR_FILENO);
    ::close(saved_);
  }
  CapturedStderr(const CapturedStderr&) = delete;
  CapturedStderr& operator=(const CapturedStderr&) = delete;

  std::string text() const {
    std::fflush(stderr);
    return get(folder_ / "stderr");
  }

 private:
  TempFolder folder_;
  int saved_;
};

}  // namespace stillfield::test

#endif  // STILLFIELD_TESTS_IMAGE_CAPTURED_STDERR_H_
