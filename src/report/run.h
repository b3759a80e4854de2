// run.json: what a run was asked to do, and what became of every image.
#ifndef STILLFIELD_REPORT_RUN_H_
#define STILLFIELD_REPORT_RUN_H_

#include <filesystem>
#include <string>
#include <vector>

#include "report/named_value.h"

namespace stillfield {

struct RunImage {
  std::string image;
  int page = 1;            // counts from 1
  std::string status;      // "done", "skipped" (finished before), "failed", "not reached"
  std::string sentence;    // why it failed; empty otherwise
  bool converged = false;  // of done and skipped images
  std::string group;       // of the summary (report/field_groups.h)
  std::string verdict;     // "sound", "look", "doubtful"; empty where nothing was checked
  std::vector<std::string> reasons;
  std::string record;  // file relative to the output folder; empty if there is none
};

struct RunSummary {
  std::string version;
  std::string command;
  std::vector<NamedValue> settings;
  std::vector<NamedValue> counts;
  std::vector<RunImage> images;
};

std::string run_text(const RunSummary& run);

// The command that wrote the file; empty if there is no such file or it is no run.json of ours.
std::string command_of_run(const std::filesystem::path& file);

}  // namespace stillfield

#endif  // STILLFIELD_REPORT_RUN_H_
