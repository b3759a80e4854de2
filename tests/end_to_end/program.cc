#include "end_to_end/program.h"

#include <fcntl.h>
#include <signal.h>
#include <sys/wait.h>

#include <sstream>

namespace stillfield::test {
namespace {

int open_for_writing(const fs::path& file) {
  return ::open(file.c_str(), O_WRONLY | O_CREAT | O_TRUNC, 0600);
}

}  // namespace

RunningProgram::RunningProgram(const Arguments& arguments, const fs::path& program) {
  std::string name = program.string();
  Arguments copies = arguments;
  std::vector<char*> words = {name.data()};
  for (std::string& argument : copies) words.push_back(argument.data());
  words.push_back(nullptr);
  const int in = ::open("/dev/null", O_RDONLY);
  const int out = open_for_writing(folder_ / "out");
  const int err = open_for_writing(folder_ / "err");
  process_ = ::fork();
  if (process_ == 0) {
    ::dup2(in, STDIN_FILENO);
    ::dup2(out, STDOUT_FILENO);
    ::dup2(err, STDERR_FILENO);
    ::execv(name.c_str(), words.data());
    ::_exit(127);
  }
  for (const int descriptor : {in, out, err}) ::close(descriptor);
  if (process_ < 0) throw std::runtime_error("fork failed");
}

RunningProgram::~RunningProgram() {
  if (process_ <= 0) return;
  ::kill(process_, SIGKILL);
  ::waitpid(process_, nullptr, 0);
}

void RunningProgram::signal(int number) const {
  ::kill(process_, number);
}

bool RunningProgram::has_ended() {
  if (process_ > 0 && ::waitpid(process_, &status_, WNOHANG) == process_) process_ = 0;
  return process_ == 0;
}

Ended RunningProgram::wait() {
  if (process_ > 0) ::waitpid(process_, &status_, 0);
  process_ = 0;
  const int code = WIFEXITED(status_) ? WEXITSTATUS(status_) : 128 + WTERMSIG(status_);
  return {code, get(folder_ / "out"), get(folder_ / "err")};
}

Ended run_program(const Arguments& arguments, const fs::path& program) {
  return RunningProgram(arguments, program).wait();
}

Ended segment(const fs::path& input, int classes, const fs::path& out, const Arguments& more,
              const fs::path& program) {
  Arguments arguments = {"segment", input.string(), "--classes", std::to_string(classes),
                         "--out",   out.string(),   "--quick"};
  arguments.insert(arguments.end(), more.begin(), more.end());
  return run_program(arguments, program);
}

std::vector<std::string> listed_cpu_targets(const fs::path& program) {
  std::istringstream lines(run_program({"info"}, program).out);
  const std::string label = "cpu targets ";
  for (std::string line; std::getline(lines, line);) {
    if (line.rfind(label, 0) != 0) continue;
    std::istringstream words(line.substr(label.size()));
    std::vector<std::string> targets;
    for (std::string word; words >> word;) targets.push_back(word);
    return targets;
  }
  return {};
}

std::vector<fs::path> other_programs() {
  const char* list = std::getenv("STILLFIELD_OTHER_PROGRAMS");
  std::istringstream stream(list == nullptr ? "" : list);
  std::vector<fs::path> programs;
  for (std::string path; std::getline(stream, path, ';');) {
    if (!path.empty()) programs.emplace_back(path);
  }
  return programs;
}

}  // namespace stillfield::test
