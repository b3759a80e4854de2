// C++ source files as the architecture rules look at them.
#ifndef STILLFIELD_TESTS_ARCHITECTURE_SOURCE_TEXT_H_
#define STILLFIELD_TESTS_ARCHITECTURE_SOURCE_TEXT_H_

#include <filesystem>
#include <string>
#include <vector>

namespace stillfield::architecture {

struct SourceFile {
  std::string path;  // relative to src/, with forward slashes: "core/error.h"
  std::string text;
};

struct Include {
  int line = 0;
  bool quoted = false;  // "room/file.h" rather than <header>
  std::string header;
};

// The .h and .cc files (and stray other C++ files) below `src`, sorted by path.
std::vector<SourceFile> read_sources(const std::filesystem::path& src);

// The folder a path starts with; empty for a file directly in src/.
std::string room_of(const std::string& path);

// Comments replaced by spaces; line breaks and string literals stay.
std::string without_comments(const std::string& text);

// Comments and the contents of string and character literals replaced by spaces.
std::string code_only(const std::string& text);

std::vector<std::string> lines_of(const std::string& text);
std::vector<Include> includes_of(const std::string& text);

}  // namespace stillfield::architecture

#endif  // STILLFIELD_TESTS_ARCHITECTURE_SOURCE_TEXT_H_
