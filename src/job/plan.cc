#include "job/plan.h"

#include "core/error.h"
#include "image/digest.h"
#include "image/read.h"
#include "job/resume.h"

namespace stillfield {
namespace {

void find_finished(const SettingsOf& settings_of, Look look, PlannedField& field) {
  FieldTask& task = field.task;
  if (!has_record(task.stem)) return;
  if (task.sha256.empty() && look == Look::kAtContent) task.sha256 = sha256_of_file(task.file);
  const std::vector<NamedValue> settings = settings_of(task);
  field.finished = finished_record(task.stem, [&](const ImageRecord& record) {
    const std::string& sha256 = look == Look::kAtContent ? task.sha256 : record.input.sha256;
    return settings_digest(settings, sha256, task.page + 1);
  });
}

}  // namespace

std::vector<PlannedField> plan_file(const InputFile& file, const SettingsOf& settings_of,
                                    const RunSettings& run, Look look) {
  FieldTask task;
  task.file = file.path;
  task.relative = file.relative;
  task.input = file.input;
  std::vector<PlannedField> plan;
  try {
    if (!file.failure.empty()) throw Error(ErrorKind::kInput, file.failure);
    task.stamp = stamp_of(file.path);
    task.pages = count_pages(file.path, run.limits);
    if (task.pages > 1 && look == Look::kAtContent) task.sha256 = sha256_of_file(file.path);
    for (int page = 0; page < task.pages; ++page) {
      task.page = page;
      task.stem = run.output / output_stem(file, page, task.pages);
      plan.push_back({task, std::nullopt, {}});
      if (!run.redo) find_finished(settings_of, look, plan.back());
      task.sha256 = plan.back().task.sha256;
    }
  } catch (const Error& error) {
    task.page = 0;
    task.pages = 1;
    task.stem = run.output / output_stem(file);
    plan = {{task, std::nullopt, error.what()}};
  }
  return plan;
}

}  // namespace stillfield
