// The architecture rules, one function each. They look at text only, so each is tested on
// invented snippets (check_test.cc) before it is let loose on src/ (tree_test.cc).
#ifndef STILLFIELD_TESTS_ARCHITECTURE_CHECK_H_
#define STILLFIELD_TESTS_ARCHITECTURE_CHECK_H_

#include <string>
#include <vector>

#include "architecture/source_text.h"

namespace stillfield::architecture {

inline constexpr int kMaxLines = 300;

struct Violation {
  std::string file;
  int line = 0;
  std::string what;
};
using Violations = std::vector<Violation>;

Violations check_place(const SourceFile& file);     // in a room, named .h or .cc
Violations check_includes(const SourceFile& file);  // arrows and outside headers
Violations check_length(const SourceFile& file);    // at most kMaxLines lines
Violations check_guard(const SourceFile& file);     // STILLFIELD_ROOM_FILE_H_
Violations check_numbers(const SourceFile& file);   // nothing that depends on CPU or library
Violations check_manners(const SourceFile& file);   // printing and exiting in cli, cv::Mat at home

Violations check_all(const SourceFile& file);

// True when a chain of quoted includes leads from `start` to one of `targets`, passing only
// through files (headers and the .cc beside them) of the rooms of `start` and of the targets.
bool reading_path_leads(const std::vector<SourceFile>& files, const std::string& start,
                        const std::vector<std::string>& targets);

}  // namespace stillfield::architecture

#endif  // STILLFIELD_TESTS_ARCHITECTURE_CHECK_H_
