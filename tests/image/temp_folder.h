// A folder for one test, removed with all its content when the test ends; and small helpers.
#ifndef STILLFIELD_TESTS_IMAGE_TEMP_FOLDER_H_
#define STILLFIELD_TESTS_IMAGE_TEMP_FOLDER_H_

#include <unistd.h>

#include <cstdlib>
#include <filesystem>
#include <fstream>
#include <iterator>
#include <stdexcept>
#include <string>

#include "core/error.h"

namespace stillfield::test {

namespace fs = std::filesystem;

class TempFolder {
 public:
  TempFolder() {
    std::string pattern = (fs::temp_directory_path() / "stillfield-image-XXXXXX").string();
    if (::mkdtemp(pattern.data()) == nullptr) throw std::runtime_error("mkdtemp failed");
    path_ = pattern;
  }
  ~TempFolder() {
    std::error_code ignored;
    fs::remove_all(path_, ignored);
  }
  TempFolder(const TempFolder&) = delete;
  TempFolder& operator=(const TempFolder&) = delete;

  const fs::path& path() const { return path_; }
  fs::path operator/(const fs::path& name) const { return path_ / name; }

 private:
  fs::path path_;
};

inline void put(const fs::path& file, const std::string& bytes) {
  fs::create_directories(file.parent_path());
  std::ofstream(file, std::ios::binary) << bytes;
}

inline std::string get(const fs::path& file) {
  std::ifstream in(file, std::ios::binary);
  return {std::istreambuf_iterator<char>(in), {}};
}

inline std::size_t entries_in(const fs::path& folder) {
  return static_cast<std::size_t>(
      std::distance(fs::directory_iterator(folder), fs::directory_iterator()));
}

// The sentence of the Error that `call` throws; "no error" if it does not.
template <typename Call>
std::string sentence_of(ErrorKind kind, Call&& call) {
  try {
    call();
  } catch (const Error& error) {
    return error.kind() == kind ? error.what() : std::string("wrong kind: ") + error.what();
  }
  return "no error";
}

}  // namespace stillfield::test

#endif  // STILLFIELD_TESTS_IMAGE_TEMP_FOLDER_H_
