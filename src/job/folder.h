// Folders and files through a whole job, with the tables of the run.
//
// Writes   per field what segment_field.h or denoise_field.h says; measurements.csv, summary.csv,
//          run.json and (segment) particles.csv and checks.csv, also after an interrupt; a shard
//          writes its run file in their place (job/shard.h). Fields that are finished already are
//          left alone
// Memory   of one field at a time; per image of the folder only its names are kept
// Errors   of single fields are collected; thrown are those of find_inputs() (image/walk.h),
//          read_groups() (report/field_groups.h), prepare_output_folder() and FolderLock, before
//          any work, and Error(kOutput) for the tables
#ifndef STILLFIELD_JOB_FOLDER_H_
#define STILLFIELD_JOB_FOLDER_H_

#include <filesystem>
#include <functional>
#include <string>
#include <vector>

#include "job/denoise_settings.h"
#include "job/field_task.h"
#include "job/folder_counts.h"
#include "job/observer.h"
#include "job/plan.h"
#include "job/resource_need.h"
#include "job/settings.h"
#include "parallel/pool.h"
#include "report/record.h"

namespace stillfield {

// A command as the folder loop sees it.
struct FolderJob {
  std::string command;
  std::vector<NamedValue> settings;  // all that change results, of the run
  SettingsOf settings_of;            // the same with what belongs to a field
  std::function<ResourceNeed(const PageShape&)> need;
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
