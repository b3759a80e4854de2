// Runs the program as a user does: another process, its output caught, its exit code kept.
#ifndef STILLFIELD_TESTS_END_TO_END_PROGRAM_H_
#define STILLFIELD_TESTS_END_TO_END_PROGRAM_H_

#include <sys/types.h>

#include <filesystem>
#include <string>
#include <vector>

#include "image/temp_folder.h"

namespace stillfield::test {

using Arguments = std::vector<std::string>;

struct Ended {
  int code = 0;  // exit code; 128 + signal for a process that a signal ended
  std::string out;
  std::string err;
};

class RunningProgram {
 public:
  explicit RunningProgram(const Arguments& arguments,
                          const std::filesystem::path& program = STILLFIELD_PROGRAM);
  ~RunningProgram();
  RunningProgram(const RunningProgram&) = delete;
  RunningProgram& operator=(const RunningProgram&) = delete;

  void signal(int number) const;
  bool has_ended();
  Ended wait();

 private:
  TempFolder folder_;
  pid_t process_ = -1;
  int status_ = 0;
};

Ended run_program(const Arguments& arguments,
                  const std::filesystem::path& program = STILLFIELD_PROGRAM);

// "segment INPUT --classes K --out OUT --quick" and more.
Ended segment(const std::filesystem::path& input, int classes, const std::filesystem::path& out,
              const Arguments& more = {},
              const std::filesystem::path& program = STILLFIELD_PROGRAM);

// What `info` lists.
std::vector<std::string> listed_cpu_targets(
    const std::filesystem::path& program = STILLFIELD_PROGRAM);

// From STILLFIELD_OTHER_PROGRAMS.
std::vector<std::filesystem::path> other_programs();

}  // namespace stillfield::test

#endif  // STILLFIELD_TESTS_END_TO_END_PROGRAM_H_
