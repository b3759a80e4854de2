// Options that the commands on folders share, and the summary they print.
#ifndef STILLFIELD_CLI_COMMON_OPTIONS_H_
#define STILLFIELD_CLI_COMMON_OPTIONS_H_

#include <CLI/CLI.hpp>
#include <cstdint>
#include <functional>
#include <string>
#include <vector>

#include "cli/number_option.h"
#include "job/folder.h"

namespace stillfield {

struct CommonOptions {
  std::vector<std::string> inputs;
  std::string output;
  std::string group_file;
  std::string cpu_target = "auto";
  std::string shard;
  std::string memory;
  std::string log;
  bool strict = false;
  bool quiet = false;
  RunSettings run;
};

// An option that takes a whole number; range and default are shown in the help.
template <class T>
CLI::Option* add_whole(CLI::App& app, const char* name, T& value, std::uint64_t lowest,
                       std::uint64_t highest, const char* help) {
  return app.add_option(name, value, help)
      ->check(CLI::Validator(whole_number(lowest, highest), "", ""))
      ->type_name(highest < 1000000 ? std::to_string(lowest) + ".." + std::to_string(highest) : "N")
      ->capture_default_str();
}

CLI::Option* add_choice(CLI::App& app, const char* name, std::string& value,
                        const std::vector<std::string>& choices, const char* help);

void add_inputs_and_output(CLI::App& app, CommonOptions& options);
void add_run_options(CLI::App& app, CommonOptions& options);

// Runs a command on its folder: sets folder and CPU target, catches the signals that stop a run,
// shows progress and keeps the log; says what came out and returns the exit code. `advice`: what
// may help images that did not converge.
using FolderCommand = std::function<FolderCounts(JobObserver& observer)>;
int run_command(CommonOptions& options, int max_sweeps, const char* advice,
                const FolderCommand& command);

}  // namespace stillfield

#endif  // STILLFIELD_CLI_COMMON_OPTIONS_H_
