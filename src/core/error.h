// The one exception type of the project, and the exit codes it leads to.
//
// A library room never prints and never exits: it throws Error with one clear sentence that
// names the file or option, says what is wrong and what to do about it. The command line turns
// the kind into an exit code.
#ifndef STILLFIELD_CORE_ERROR_H_
#define STILLFIELD_CORE_ERROR_H_

#include <stdexcept>
#include <string>

namespace stillfield {

enum class ErrorKind {
  kInput,     // a file cannot be read, or its content cannot be analysed
  kOutput,    // a result cannot be written
  kUsage,     // an option or a setting is wrong
  kInterrupt  // the user asked to stop
};

class Error : public std::runtime_error {
 public:
  Error(ErrorKind kind, const std::string& sentence) : std::runtime_error(sentence), kind_(kind) {}
  ErrorKind kind() const noexcept { return kind_; }

 private:
  ErrorKind kind_;
};

// Process exit codes, documented in README.
enum ExitCode : int {
  kExitAllDone = 0,
  kExitSomeFailed = 1,
  kExitBadUsage = 2,
  kExitNotConverged = 3,  // with --strict only
  kExitInterrupted = 130  // 128 + SIGINT, the shell's convention
};

}  // namespace stillfield

#endif  // STILLFIELD_CORE_ERROR_H_
