// What there is to do for a file: every page, finished ones found.
#ifndef STILLFIELD_JOB_PLAN_H_
#define STILLFIELD_JOB_PLAN_H_

#include <functional>
#include <optional>
#include <string>
#include <vector>

#include "image/walk.h"
#include "job/field_task.h"
#include "job/settings.h"
#include "report/record.h"

namespace stillfield {

struct PlannedField {
  FieldTask task;
  std::optional<ImageRecord> finished;  // of an earlier run
  std::string failure;                  // why the file cannot be opened; empty if it can
};

// Settings that change the results of a field.
using SettingsOf = std::function<std::vector<NamedValue>(const FieldTask& task)>;

// How to know that the image of a record is still the same: by the digest of the file, or (in a
// hurry) not at all.
enum class Look { kAtContent, kAtRecord };

// The file is digested where it has several pages or a record stands already.
std::vector<PlannedField> plan_file(const InputFile& file, const SettingsOf& settings_of,
                                    const RunSettings& run, Look look = Look::kAtContent);

}  // namespace stillfield

#endif  // STILLFIELD_JOB_PLAN_H_
