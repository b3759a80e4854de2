#include "cli/report.h"

#include <CLI/CLI.hpp>
#include <cstdio>
#include <memory>
#include <string>

#include "cli/printable.h"
#include "core/error.h"
#include "job/report_folder.h"

namespace stillfield {
namespace {

constexpr char kEpilogue[] =
    "After the parts of a run (--shard) have ended, this writes the tables of the whole folder:\n"
    "measurements.csv, summary.csv, run.json and, of segment, particles.csv and checks.csv, the\n"
    "same bytes as one run over all images. It also makes the tables anew when one was lost, and\n"
    "those of the images finished so far when a run was killed.\n"
    "\n"
    "Example:\n"
    "  stillfield segment fields/ --classes 3 --out results --shard 1/2   # on one machine\n"
    "  stillfield segment fields/ --classes 3 --out results --shard 2/2   # on another\n"
    "  stillfield report results\n";

int run_report(const std::string& folder) {
  const FolderReport report = report_folder(folder);
  for (const std::string& sentence : report.failures) {
    std::fprintf(stderr, "stillfield: %s\n", printable(sentence).c_str());
  }
  const FolderCounts& counts = report.counts;
  std::printf("%d images in the tables of %s", counts.done + counts.skipped, folder.c_str());
  if (counts.failed > 0) std::printf(", %d failed", counts.failed);
  if (counts.not_reached > 0) std::printf(", %d not reached", counts.not_reached);
  std::printf(".\n");
  return report.failures.empty() && counts.not_reached == 0 ? kExitAllDone : kExitSomeFailed;
}

}  // namespace

Command add_report(CLI::App& app) {
  auto folder = std::make_shared<std::string>();
  CLI::App* report =
      app.add_subcommand("report", "Tables of an output folder anew, from the records in it");
  report->footer(kEpilogue);
  report->add_option("DIR", *folder, "Folder that segment or denoise wrote")
      ->required()
      ->type_name("");
  return {report, [folder] { return run_report(*folder); }};
}

}  // namespace stillfield
