#include "job/folder.h"

#include <algorithm>
#include <optional>

#include "core/error.h"
#include "image/file_bytes.h"
#include "job/denoise_field.h"
#include "job/learn_patches.h"
#include "job/output_folder.h"
#include "job/plan.h"
#include "job/segment_field.h"
#include "report/check_table.h"
#include "report/field_groups.h"
#include "report/particle_csv.h"
#include "report/run.h"
#include "report/tables.h"
#include "report/versions.h"

namespace stillfield {
namespace {

namespace fs = std::filesystem;

// What is known so far; the tables come from here.
class RunLog {
 public:
  RunLog(const FolderJob& job, const RunSettings& run, FieldGroups groups)
      : run_(run), groups_(std::move(groups)) {
    summary_.version = program_version();
    summary_.command = job.command;
    summary_.settings = job.settings;
  }

  void add(const FieldTask& task, const ImageRecord& record, bool before) {
    ++(before ? counts_.skipped : counts_.done);
    if (!record.verdict.converged) ++counts_.not_converged;
    if (record.assessment.check_failed) ++counts_.check_failed;
    const fs::path file = with_suffix(task.stem, kRecordSuffix);
    list(task, before ? "skipped" : "done");
    summary_.images.back().converged = record.verdict.converged;
    if (record.command == kSegment) {
      summary_.images.back().verdict = record.assessment.word;
      summary_.images.back().reasons = record.assessment.reasons;
    }
    summary_.images.back().record = file.lexically_relative(run_.output).generic_string();
    records_.push_back(record);
    stems_.push_back(task.stem);
    record_groups_.push_back(summary_.images.back().group);
  }
  void add_failure(const FieldTask& task, const std::string& sentence) {
    ++counts_.failed;
    list(task, "failed");
    summary_.images.back().sentence = sentence;
  }
  void add_not_reached(const FieldTask& task) {
    ++counts_.not_reached;
    counts_.interrupted = true;
    list(task, "not reached");
  }

  void write_tables() {
    const auto count = [this](const char* name, int value) {
      summary_.counts.push_back({name, static_cast<std::uint64_t>(value)});
    };
    count("done", counts_.done);
    count("skipped", counts_.skipped);
    count("failed", counts_.failed);
    count("not_reached", counts_.not_reached);
    count("not_converged", counts_.not_converged);
    count("check_failed", counts_.check_failed);
    write_if_changed(run_.output / "measurements.csv", measurements_csv(records_));
    write_if_changed(run_.output / "summary.csv", summary_csv(records_, record_groups_));
    if (summary_.command == kSegment) {
      write_if_changed(run_.output / "checks.csv", checks_csv(records_));
      write_if_changed(run_.output / "particles.csv", particles_of_all());
    }
    write_if_changed(run_.output / "run.json", run_text(summary_));
  }
  const FolderCounts& counts() const { return counts_; }

 private:
  std::string particles_of_all() const {
    std::vector<std::string> tables;
    for (const fs::path& stem : stems_) {
      const std::vector<std::byte> bytes = read_whole(with_suffix(stem, kParticlesSuffix));
      tables.emplace_back(reinterpret_cast<const char*>(bytes.data()), bytes.size());
    }
    return joined_particles_csv(tables);
  }
  void list(const FieldTask& task, const char* status) {
    RunImage image;
    image.image = task.relative.generic_string();
    image.page = task.page + 1;
    image.status = status;
    image.group = groups_.at(image.image);
    summary_.images.push_back(std::move(image));
  }

  const RunSettings& run_;
  FieldGroups groups_;
  RunSummary summary_;
  FolderCounts counts_;
  std::vector<ImageRecord> records_;
  std::vector<fs::path> stems_;  // of the records
  std::vector<std::string> record_groups_;
};

FieldGroups groups_of(const std::vector<InputFile>& files, const RunSettings& run) {
  std::vector<std::string> images;
  for (const InputFile& file : files) images.push_back(file.relative.generic_string());
  return run.group_file.empty() ? group_by_folder(images)
                                : read_groups(run.group_file, run.group_column, images);
}

// Records of two commands would bear the same names.
void refuse_results_of_another_command(const fs::path& output, const std::string& command) {
  const std::string before = command_of_run(output / "run.json");
  if (before.empty() || before == command) return;
  throw Error(ErrorKind::kUsage, output.string() + ": holds the results of `" + before +
                                     "`; give --out another folder for those of `" + command + "`");
}

}  // namespace

FolderCounts run_folder(const std::vector<fs::path>& inputs, const FolderJob& job,
                        const RunSettings& run, JobObserver& observer) {
  const std::vector<InputFile> files = find_inputs(inputs, run.output);
  FieldGroups groups = groups_of(files, run);
  prepare_output_folder(run.output);
  refuse_results_of_another_command(run.output, job.command);
  const std::vector<PlannedField> plan = plan_fields(files, job.settings, run, observer);
  const auto finished = static_cast<int>(std::count_if(
      plan.begin(), plan.end(), [](const PlannedField& f) { return f.finished.has_value(); }));
  const int to_do = static_cast<int>(plan.size()) - finished;
  observer.planned(to_do, finished);

  const Pool pool(run.threads);
  RunLog log(job, run, std::move(groups));
  int number = 0;
  bool stopped = false;
  for (const PlannedField& field : plan) {
    const FieldTask& task = field.task;
    if (field.finished) {
      log.add(task, *field.finished, true);
      continue;
    }
    stopped = stopped || observer.stop_requested();
    if (stopped) {
      log.add_not_reached(task);
      continue;
    }
    observer.field_started(number++, to_do, task.name());
    try {
      if (!field.failure.empty()) throw Error(ErrorKind::kInput, field.failure);
      const ImageRecord record = job.run_field(task, pool);
      log.add(task, record, false);
      observer.field_finished(task.name(), record.verdict.converged);
    } catch (const Error& error) {
      stopped = error.kind() == ErrorKind::kInterrupt;
      if (stopped) {
        log.add_not_reached(task);
      } else {
        log.add_failure(task, error.what());
        observer.field_failed(task.name(), error.what());
      }
    }
  }
  log.write_tables();
  return log.counts();
}

FolderCounts segment_folder(const std::vector<fs::path>& inputs, const SegmentSettings& settings,
                            const RunSettings& run, JobObserver& observer) {
  LogPartitionMemo memo;
  const auto run_field = [&](const FieldTask& task, const Pool& pool) {
    return segment_field(task, settings, run, pool, observer, memo);
  };
  return run_folder(inputs, {kSegment, named_settings(settings), run_field}, run, observer);
}

FolderCounts denoise_folder(const std::vector<fs::path>& inputs, const DenoiseSettings& settings,
                            const RunSettings& run, JobObserver& observer) {
  std::optional<PatchMixture> mixture;
  if (settings.prior == PriorChoice::kPatches && !settings.learn_from.empty()) {
    mixture = learn_patches(settings, run.limits, Pool(run.threads), observer);
  }
  const auto run_field = [&](const FieldTask& task, const Pool& pool) {
    return denoise_field(task, settings, run, pool, observer, mixture ? &*mixture : nullptr);
  };
  return run_folder(inputs, {kDenoise, named_settings(settings), run_field}, run, observer);
}

}  // namespace stillfield
