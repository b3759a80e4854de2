// `--log FILE`: what a run did and when, one line an event, added to the end of the file.
//
// Line     2026-12-01T17:03:22Z TEXT, in UTC. Each line is one write to the end of the file, so
// that
//          parts of a run may share a log
// Errors   Error(kOutput) when it cannot be opened; later failures (a full disk) do not stop the
//          run: failed() tells of them
#ifndef STILLFIELD_CLI_LOG_FILE_H_
#define STILLFIELD_CLI_LOG_FILE_H_

#include <string>

namespace stillfield {

class LogFile {
 public:
  // An empty name: no log.
  explicit LogFile(const std::string& file);
  ~LogFile();
  LogFile(const LogFile&) = delete;
  LogFile& operator=(const LogFile&) = delete;

  void line(const std::string& text);
  bool failed() const { return failed_; }

 private:
  int descriptor_ = -1;
  bool failed_ = false;
};

}  // namespace stillfield

#endif  // STILLFIELD_CLI_LOG_FILE_H_
