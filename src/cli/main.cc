// The command line: reads it, runs one command, turns errors into sentences and exit codes.
#include <CLI/CLI.hpp>
#include <cstdio>
#include <exception>
#include <vector>

#include "cli/camera.h"
#include "cli/denoise.h"
#include "cli/info.h"
#include "cli/printable.h"
#include "cli/report.h"
#include "cli/score.h"
#include "cli/segment.h"
#include "core/error.h"
#include "image/libraries.h"
#include "report/versions.h"

namespace stillfield {
namespace {

constexpr char kEpilogue[] =
    "Exit codes: 0 all done; 1 some inputs failed; 2 wrong usage; 3 with --strict: all done, but\n"
    "some results did not converge; 130 stopped by Ctrl-C.\n"
    "\n"
    "Examples:\n"
    "  stillfield segment micrographs/ --classes 3 --out results\n"
    "  stillfield segment --help\n"
    "\n"
    "Not a medical device. No diagnosis, release of a part or decision on safety may rest on its\n"
    "results alone; local codes and licensed practice decide.\n";

int exit_code(ErrorKind kind) {
  switch (kind) {
    case ErrorKind::kUsage:
      return kExitBadUsage;
    case ErrorKind::kInterrupt:
      return kExitInterrupted;
    case ErrorKind::kInput:
    case ErrorKind::kOutput:
      break;
  }
  return kExitSomeFailed;
}

int complain(const char* sentence, int code) {
  std::fprintf(stderr, "stillfield: %s\n", printable(sentence).c_str());
  return code;
}

int run(int argc, char** argv) {
  CLI::App app{"Label maps and measurements with honest uncertainty from noisy images.",
               kProgramName};
  app.set_version_flag("--version", std::string(kProgramName) + " " + program_version());
  app.set_config("--config", "", "TOML file with a section for each command: [segment] ...")
      ->type_name("FILE");
  app.allow_config_extras(CLI::config_extras_mode::error);
  app.require_subcommand(0, 1);
  app.footer(kEpilogue);
  const std::vector<Command> commands = {add_segment(app), add_denoise(app), add_camera(app),
                                         add_score(app),   add_report(app),  add_info(app)};
  try {
    app.parse(argc, argv);
  } catch (const CLI::Success& request) {  // --help, --version
    return app.exit(request);
  } catch (const CLI::ParseError& error) {
    complain(error.what(), kExitBadUsage);
    std::fprintf(stderr, "Options are listed by: stillfield --help, stillfield COMMAND --help\n");
    return kExitBadUsage;
  }
  for (const Command& command : commands) {
    if (command.options->parsed()) return command.run();
  }
  return complain(
      "a command is needed: segment, denoise, camera, score, report or info (stillfield --help)",
      kExitBadUsage);
}

}  // namespace
}  // namespace stillfield

int main(int argc, char** argv) {
  using namespace stillfield;
  try {
    use_one_thread_in_image_libraries();
    return run(argc, argv);
  } catch (const Error& error) {
    return complain(error.what(), exit_code(error.kind()));
  } catch (const std::exception& error) {
    return complain(error.what(), kExitSomeFailed);
  }
}
