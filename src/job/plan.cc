#include "job/plan.h"

#include "core/error.h"
#include "image/digest.h"
#include "image/read.h"
#include "job/resume.h"

namespace stillfield {
namespace {

void plan_file(const InputFile& file, const std::vector<NamedValue>& settings,
               const RunSettings& run, std::vector<PlannedField>& plan) {
  const int pages = count_pages(file.path, run.limits);
  std::string sha256 = pages > 1 ? sha256_of_file(file.path) : "";
  for (int page = 0; page < pages; ++page) {
    const auto stem = run.output / output_stem(file, page, pages);
    const bool look = !run.redo && has_record(stem);
    if (look && sha256.empty()) sha256 = sha256_of_file(file.path);
    PlannedField field;
    field.task = {file.path, file.relative, page, pages, stem, sha256};
    if (look) field.finished = finished_record(stem, settings_digest(settings, sha256, page + 1));
    plan.push_back(std::move(field));
  }
}

}  // namespace

std::vector<PlannedField> plan_fields(const std::vector<InputFile>& files,
                                      const std::vector<NamedValue>& settings,
                                      const RunSettings& run, const JobObserver& observer) {
  std::vector<PlannedField> plan;
  for (const InputFile& file : files) {
    if (observer.stop_requested()) throw Error(ErrorKind::kInterrupt, "stopped on request");
    const std::size_t before = plan.size();
    try {
      plan_file(file, settings, run, plan);
    } catch (const Error& error) {
      plan.resize(before);
      PlannedField field;
      field.task = {file.path, file.relative, 0, 1, run.output / output_stem(file), ""};
      field.failure = error.what();
      plan.push_back(std::move(field));
    }
  }
  return plan;
}

}  // namespace stillfield
