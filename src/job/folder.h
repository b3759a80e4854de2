// Folders and files through the whole job, with the tables of the run.
//
// Writes   per field what segment_field.h says; measurements.csv, summary.csv and run.json, also
//          after an interrupt. Fields that are finished already are left alone.
// Errors   of single fields are collected; thrown are those of find_inputs() (image/walk.h) and
//          prepare_output_folder(), before any work, and Error(kOutput) for the tables
#ifndef STILLFIELD_JOB_FOLDER_H_
#define STILLFIELD_JOB_FOLDER_H_

#include <filesystem>
#include <vector>

#include "job/observer.h"
#include "job/settings.h"

namespace stillfield {

struct FolderCounts {
  int done = 0;
  int skipped = 0;  // finished before
  int failed = 0;
  int not_reached = 0;
  int not_converged = 0;  // of those done or skipped
  bool interrupted = false;
};

FolderCounts segment_folder(const std::vector<std::filesystem::path>& inputs,
                            const SegmentSettings& settings, const RunSettings& run,
                            JobObserver& observer);

}  // namespace stillfield

#endif  // STILLFIELD_JOB_FOLDER_H_
