// One line on the terminal that says where the run is; and the sentences of failed files.
//
// The line goes to the error stream and is redrawn in place, at most ten times a second. Without a
// terminal, or when asked to be quiet, only failures are written. What begins, ends and fails also
// goes to the log.
#ifndef STILLFIELD_CLI_PROGRESS_H_
#define STILLFIELD_CLI_PROGRESS_H_

#include <chrono>
#include <string>

#include "cli/log_file.h"
#include "job/observer.h"

namespace stillfield {

class Progress : public JobObserver {
 public:
  Progress(bool quiet, int max_sweeps, const std::string& log_file = {});
  ~Progress() override;
  Progress(const Progress&) = delete;
  Progress& operator=(const Progress&) = delete;

  void field_started(int number, int of, const std::string& name) override;
  void swept(Stage stage, int sweeps) override;
  void stepped(int step, int steps) override;
  void field_finished(const std::string& name, bool converged) override;
  void field_failed(const std::string& name, const std::string& sentence) override;
  void listed(const ListedField& field) override;
  bool stop_requested() const override;

  LogFile& log() { return log_; }

 private:
  using Clock = std::chrono::steady_clock;

  void draw(const std::string& state);
  void clear();
  bool due() const;
  std::string time_left(int sweeps) const;

  LogFile log_;
  bool quiet_;
  bool visible_;
  bool drawn_ = false;
  int max_sweeps_;
  int adapting_sweeps_ = 0;
  int number_ = 0;
  int of_ = 0;
  int finished_ = 0;
  double finished_seconds_ = 0;
  std::string name_;
  Clock::time_point field_start_;
  Clock::time_point last_drawn_;
};

// "40 s", "12 min", "3 h 20 min".
std::string duration_text(double seconds);

// At most `width` characters of a file name, the end rather than the start, without control
// characters.
std::string shortened(const std::string& name, std::size_t width);

}  // namespace stillfield

#endif  // STILLFIELD_CLI_PROGRESS_H_
