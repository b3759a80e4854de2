// Folders and files through a whole job, with the tables of the run.
//
// Writes   per field what segment_field.h or denoise_field.h says; measurements.csv, summary.csv,
//          run.json and (segment) particles.csv and checks.csv, also after an interrupt. Fields that
//          are finished already are left alone.
// Errors   of single fields are collected; thrown are those of find_inputs() (image/walk.h),
//          read_groups() (report/field_groups.h) and prepare_output_folder(), before any work, and
//          Error(kOutput) for the tables
#ifndef STILLFIELD_JOB_FOLDER_H_
#define STILLFIELD_JOB_FOLDER_H_

#include <filesystem>
#include <functional>
#include <string>
#include <vector>

#include "job/denoise_settings.h"
#include "job/field_task.h"
#include "job/observer.h"
#include "job/settings.h"
#include "parallel/pool.h"
#include "report/record.h"

namespace stillfield {

struct FolderCounts {
  int done = 0;
  int skipped = 0;  // finished before
  int failed = 0;
  int not_reached = 0;
  int not_converged = 0;  // of those done or skipped
  int check_failed = 0;   // likewise
  bool interrupted = false;
};

// A command as the folder loop sees it.
struct FolderJob {
  std::string command;
  std::vector<NamedValue> settings;  // all that change results
  std::function<ImageRecord(const FieldTask&, const Pool&)> run_field;
};

FolderCounts run_folder(const std::vector<std::filesystem::path>& inputs, const FolderJob& job,
                        const RunSettings& run, JobObserver& observer);

FolderCounts segment_folder(const std::vector<std::filesystem::path>& inputs,
                            const SegmentSettings& settings, const RunSettings& run,
                            JobObserver& observer);

FolderCounts denoise_folder(const std::vector<std::filesystem::path>& inputs,
                            const DenoiseSettings& settings, const RunSettings& run,
                            JobObserver& observer);

}  // namespace stillfield

#endif  // STILLFIELD_JOB_FOLDER_H_
