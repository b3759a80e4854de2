#include "cli/progress.h"

#include <sys/ioctl.h>
#include <unistd.h>

#include <algorithm>
#include <cmath>
#include <cstdio>

#include "cli/printable.h"
#include "cli/signals.h"
#include "job/resource_need.h"

namespace stillfield {
namespace {

constexpr double kRedrawSeconds = 0.1;

double seconds_between(std::chrono::steady_clock::time_point a,
                       std::chrono::steady_clock::time_point b) {
  return std::chrono::duration<double>(b - a).count();
}

std::size_t terminal_width() {
  winsize size{};
  if (::ioctl(STDERR_FILENO, TIOCGWINSZ, &size) != 0 || size.ws_col == 0) return 80;
  return size.ws_col;
}

const char* stage_text(Stage stage) {
  switch (stage) {
    case Stage::kAdapting:
      return "fitting the coupling";
    case Stage::kWarming:
      return "warming up";
    case Stage::kSampling:
      return "sampling";
    case Stage::kDone:
      return "writing";
  }
  return "";
}

std::string seconds_text(double seconds) {
  char text[32];
  std::snprintf(text, sizeof text, "%.1f s", seconds);
  return text;
}

bool continues_character(char c) {
  return (static_cast<unsigned char>(c) & 0xC0) == 0x80;
}

}  // namespace

Progress::Progress(bool quiet, int max_sweeps, const std::string& log_file)
    : log_(log_file),
      quiet_(quiet),
      visible_(!quiet && ::isatty(STDERR_FILENO) == 1),
      max_sweeps_(max_sweeps) {}

Progress::~Progress() {
  clear();
  if (log_.failed()) {
    std::fprintf(stderr, "stillfield: lines of the log could not be written; free some space\n");
  }
}

void Progress::field_started(int number, int of, const std::string& name) {
  number_ = number;
  of_ = of;
  adapting_sweeps_ = 0;
  name_ = name;
  field_start_ = Clock::now();
  log_.line("begin " + std::to_string(number + 1) + " of " + std::to_string(of) + ": " + name);
  draw("reading");
}

void Progress::swept(Stage stage, int sweeps) {
  if (stage == Stage::kAdapting) adapting_sweeps_ = sweeps;
  if (!visible_ || (!due() && stage != Stage::kDone)) return;
  draw(std::string(stage_text(stage)) + ", " + std::to_string(sweeps) + " sweeps" +
       time_left(sweeps));
}

void Progress::stepped(int step, int steps) {
  if (!visible_ || !due()) return;
  adapting_sweeps_ = 0;
  max_sweeps_ = steps;
  draw("restoring, step " + std::to_string(step) + " of " + std::to_string(steps) +
       time_left(step));
}

bool Progress::due() const {
  return seconds_between(last_drawn_, Clock::now()) >= kRedrawSeconds;
}

void Progress::field_finished(const std::string& name, bool converged) {
  const double seconds = seconds_between(field_start_, Clock::now());
  ++finished_;
  finished_seconds_ += seconds;
  log_.line("done in " + seconds_text(seconds) + ": " + name +
            (converged ? "" : " (did not converge)"));
}

void Progress::field_failed(const std::string& /*name*/, const std::string& sentence) {
  clear();
  std::fprintf(stderr, "stillfield: %s\n", printable(sentence).c_str());
  log_.line("failed: " + sentence);
}

void Progress::listed(const ListedField& field) {
  if (quiet_) return;
  std::string size;
  if (field.width > 0) {
    size = " (" + std::to_string(field.width) + " x " + std::to_string(field.height) + ", " +
           memory_text(field.bytes) + " of memory)";
  }
  std::printf("%s%s: %s\n", printable(field.name).c_str(), size.c_str(),
              printable(field.state).c_str());
}

bool Progress::stop_requested() const {
  return stop_signalled();
}

// From the mean time of the images so far; before the first is finished, what it takes if it uses
// all its sweeps, once they are being counted.
std::string Progress::time_left(int sweeps) const {
  const double here = seconds_between(field_start_, Clock::now());
  if (finished_ > 0) {
    const double mean = finished_seconds_ / finished_;
    const double left = std::max(mean - here, 0.0) + mean * (of_ - number_ - 1);
    return ", about " + duration_text(left) + " left";
  }
  if (sweeps <= adapting_sweeps_) return "";
  const int left = std::max(max_sweeps_ + adapting_sweeps_ - sweeps, 0);
  return ", up to " + duration_text(here / sweeps * left) + " for this image";
}

void Progress::draw(const std::string& state) {
  if (!visible_) return;
  std::string head = "[";
  head.append(std::to_string(number_ + 1)).append("/").append(std::to_string(of_)).append("] ");
  const std::string tail = ": " + state;
  const std::size_t width = terminal_width();
  const std::size_t taken = head.size() + tail.size() + 1;
  const std::size_t room = width > taken + 8 ? width - taken : 8;
  const std::string line = head + shortened(name_, room) + tail;
  std::fprintf(stderr, "\r\033[K%s", line.c_str());
  std::fflush(stderr);
  drawn_ = true;
  last_drawn_ = Clock::now();
}

void Progress::clear() {
  if (!drawn_) return;
  std::fprintf(stderr, "\r\033[K");
  std::fflush(stderr);
  drawn_ = false;
}

std::string duration_text(double seconds) {
  const auto whole = static_cast<long>(std::ceil(seconds));
  if (whole < 100) return std::to_string(whole) + " s";
  const long minutes = (whole + 30) / 60;
  if (minutes < 100) return std::to_string(minutes) + " min";
  return std::to_string(minutes / 60) + " h " + std::to_string(minutes % 60) + " min";
}

std::string shortened(const std::string& name, std::size_t width) {
  const std::string text = printable(name);
  const auto starts = static_cast<std::size_t>(
      std::count_if(text.begin(), text.end(), [](char c) { return !continues_character(c); }));
  if (starts <= width) return text;
  std::size_t drop = starts - (width > 3 ? width - 3 : 0);
  std::size_t at = 0;
  while (at < text.size() && (drop > 0 || continues_character(text[at]))) {
    if (!continues_character(text[at])) --drop;
    ++at;
  }
  return "..." + text.substr(at);
}

}  // namespace stillfield
