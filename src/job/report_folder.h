// `report`: the tables of an output folder anew, from the records in it.
//
// Which    images, by the run files of shards if there are any, else by run.json, else every record
//          below the folder (of a run that was killed, or is still at work), in byte order of their
//          names and with their folders as groups
// Order    of shards together: by input, name and page, which is the order of one run
// Writes   measurements.csv, summary.csv, run.json; of segment particles.csv and checks.csv: the
//          bytes that one run over all images writes
#ifndef STILLFIELD_JOB_REPORT_FOLDER_H_
#define STILLFIELD_JOB_REPORT_FOLDER_H_

#include <filesystem>
#include <string>
#include <vector>

#include "job/folder_counts.h"

namespace stillfield {

struct FolderReport {
  FolderCounts counts;
  std::vector<std::string> failures;  // sentences: of images, and of shards that are missing
};

// Throws Error(kInput) if there is nothing to report on, or parts of different runs;
// Error(kOutput).
FolderReport report_folder(const std::filesystem::path& folder);

}  // namespace stillfield

#endif  // STILLFIELD_JOB_REPORT_FOLDER_H_
