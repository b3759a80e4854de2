// `--dry-run`: what a run would do, without doing it and without writing anything.
//
// Time     from the images of this run that are finished already, by the pixel, if there are any;
//          else from typical figures (job/resource_need.h)
#ifndef STILLFIELD_JOB_DRY_RUN_H_
#define STILLFIELD_JOB_DRY_RUN_H_

#include <vector>

#include "image/walk.h"
#include "job/folder.h"

namespace stillfield {

// Tells the observer of every field; `done` counts those to do. Throws Error(kInterrupt).
FolderCounts dry_run(const std::vector<InputFile>& files, const FolderJob& job,
                     const RunSettings& run, JobObserver& observer);

}  // namespace stillfield

#endif  // STILLFIELD_JOB_DRY_RUN_H_
