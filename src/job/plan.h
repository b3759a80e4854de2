// What a run has to do: every page of every input, finished ones found, unreadable ones named.
#ifndef STILLFIELD_JOB_PLAN_H_
#define STILLFIELD_JOB_PLAN_H_

#include <optional>
#include <string>
#include <vector>

#include "image/walk.h"
#include "job/field_task.h"
#include "job/observer.h"
#include "job/settings.h"
#include "report/record.h"

namespace stillfield {

struct PlannedField {
  FieldTask task;
  std::optional<ImageRecord> finished;  // of an earlier run
  std::string failure;                  // why the file cannot be opened; empty if it can
};

// In the order of the files. Throws Error(kInterrupt) when the observer asks to stop. Files are
// digested where they have several pages or a record stands already.
std::vector<PlannedField> plan_fields(const std::vector<InputFile>& files,
                                      const std::vector<NamedValue>& settings,
                                      const RunSettings& run, const JobObserver& observer);

}  // namespace stillfield

#endif  // STILLFIELD_JOB_PLAN_H_
