// run.json: what a run was asked to do, and what became of every image; and shard-I-of-N.json, the
// same of a part of a run (docs/outputs.md).
//
// Written and read image by image, so that runs of many images need no memory for it: head, images,
// tail. The text is JSON with two spaces a level.
#ifndef STILLFIELD_REPORT_RUN_H_
#define STILLFIELD_REPORT_RUN_H_

#include <filesystem>
#include <functional>
#include <string>
#include <vector>

#include "report/named_value.h"

namespace stillfield {

struct RunImage {
  std::string image;
  int page = 1;            // counts from 1
  int input = 1;           // which of the inputs named held it, from 1
  std::string status;      // "done", "skipped" (finished before), "failed", "not reached"
  std::string sentence;    // why it failed; empty otherwise
  bool converged = false;  // of done and skipped images
  std::string group;       // of the summary (report/field_groups.h)
  std::string verdict;     // "sound", "look", "doubtful"; empty where nothing was checked
  std::vector<std::string> reasons;
  std::string record;  // file relative to the output folder; empty if there is none
};

struct RunHead {
  std::string version;
  std::string command;
  std::vector<NamedValue> settings;
  int shard = 0;   // from 1; 0: not a part
  int shards = 0;  // of how many
};

std::string run_head(const RunHead& head);
std::string run_image(const RunImage& image, bool first);
std::string run_tail(const std::vector<NamedValue>& counts);

// Calls `see` for each image, in order. Throws Error(kInput) if the file is none of ours.
RunHead read_run(const std::filesystem::path& file, const std::function<void(RunImage image)>& see);

// The command that wrote the file; empty if there is no such file or it is no run.json of ours.
std::string command_of_run(const std::filesystem::path& file);

}  // namespace stillfield

#endif  // STILLFIELD_REPORT_RUN_H_
