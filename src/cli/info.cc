#include "cli/info.h"

#include <CLI/CLI.hpp>
#include <cstdio>
#include <string>

#include "core/error.h"
#include "report/versions.h"
#include "simd/target.h"

namespace stillfield {
namespace {

void print_row(const char* label, const std::string& text) {
  std::printf("%-12s %s\n", label, text.c_str());
}

int print_info() {
  print_row(kProgramName, program_version());
  print_row("cpu target", active_cpu_target());
  std::string targets;
  for (const std::string& name : cpu_targets()) targets += (targets.empty() ? "" : " ") + name;
  print_row("cpu targets", targets);
  const char* label = "libraries";
  for (const LibraryVersion& library : library_versions()) {
    print_row(label, library.name + " " + library.version);
    label = "";
  }
  print_row("reads", "TIFF and BigTIFF (1 to 32-bit integer, 32 and 64-bit float, pages, tiles),");
  print_row("", "PNG, JPEG, BMP, PBM, PGM, PPM; colour becomes luminance");
  print_row("writes", "TIFF (8-bit integer, 32-bit float), PNG, JSON, CSV");
  return kExitAllDone;
}

}  // namespace

Command add_info(CLI::App& app) {
  CLI::App* info = app.add_subcommand("info", "Version, CPU targets, libraries and formats");
  return {info, print_info};
}

}  // namespace stillfield
