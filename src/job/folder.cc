#include "job/folder.h"

#include <algorithm>
#include <optional>
#include <set>

#include "core/error.h"
#include "core/utf8.h"
#include "image/leftovers.h"
#include "job/denoise_field.h"
#include "job/dry_run.h"
#include "job/folder_lock.h"
#include "job/folder_results.h"
#include "job/learn_patches.h"
#include "job/mask.h"
#include "job/output_folder.h"
#include "job/segment_field.h"
#include "report/field_groups.h"
#include "report/versions.h"

namespace stillfield {
namespace {

namespace fs = std::filesystem;

GroupOf groups_of(const std::vector<InputFile>& files, const RunSettings& run) {
  if (run.group_file.empty()) return folder_group;
  std::vector<std::string> images;
  for (const InputFile& file : files) images.push_back(utf8_name(file.relative.generic_string()));
  return [groups = read_groups(run.group_file, run.group_column, images)](
             const std::string& image) { return groups.at(image); };
}

void keep_shard(const RunSettings& run, std::vector<InputFile>& files) {
  if (!run.shard) return;
  std::erase_if(files,
                [&run](const InputFile& file) { return !is_in_shard(*run.shard, file.relative); });
}

// Records of two commands would bear the same names.
void refuse_results_of_another_command(const fs::path& output, const std::string& command) {
  std::vector<fs::path> run_files = shard_files(output);
  run_files.push_back(output / kRunFile);
  for (const fs::path& file : run_files) {
    const std::string before = command_of_run(file);
    if (before.empty() || before == command) continue;
    throw Error(ErrorKind::kUsage, output.string() + ": holds the results of `" + before +
                                       "`; give --out another folder for those of `" + command +
                                       "`");
  }
}

// Of runs that were killed; in the folders that this run writes to.
void remove_leftovers_of_killed_runs(const fs::path& output, const std::vector<InputFile>& files) {
  std::set<fs::path> folders = {output};
  for (const InputFile& file : files) folders.insert((output / file.output).parent_path());
  for (const fs::path& folder : folders) remove_leftovers(folder);
}

// The fields of a run, one after the other.
class FieldLoop {
 public:
  FieldLoop(const FolderJob& job, const RunSettings& run, JobObserver& observer,
            FolderResults& results)
      : job_(job),
        run_(run),
        observer_(observer),
        results_(results),
        pool_(run.threads, [this] { return observer_.stop_requested(); }),
        memory_(run.memory > 0 ? run.memory : available_memory()) {}

  // `further`: how many files come after this one.
  void do_file(const InputFile& file, int further) {
    stopped_ = stopped_ || observer_.stop_requested();
    const Look look = stopped_ ? Look::kAtRecord : Look::kAtContent;
    const std::vector<PlannedField> plan = plan_file(file, job_.settings_of, run_, look);
    int left = static_cast<int>(plan.size()) + further;
    for (const PlannedField& field : plan) {
      stopped_ = stopped_ || observer_.stop_requested();
      if (field.finished) {
        results_.add(field.task, *field.finished, true);
      } else if (stopped_) {
        results_.add_not_reached(field.task);
      } else {
        observer_.field_started(number_, number_ + left, field.task.name());
        do_field(field);
      }
      ++number_;
      --left;
    }
  }

 private:
  void do_field(const PlannedField& field) {
    const FieldTask& task = field.task;
    try {
      if (!field.failure.empty()) throw Error(ErrorKind::kInput, field.failure);
      refuse_what_needs_too_much(task);
      const ImageRecord record = job_.run_field(task, pool_);
      results_.add(task, record, false);
      observer_.field_finished(task.name(), record.verdict.converged);
    } catch (const Error& error) {
      stopped_ = error.kind() == ErrorKind::kInterrupt;
      if (stopped_) {
        results_.add_not_reached(task);
      } else {
        results_.add_failure(task, error.what());
        observer_.field_failed(task.name(), error.what());
      }
    }
  }

  void refuse_what_needs_too_much(const FieldTask& task) const {
    const PageShape shape = page_shape(task.file, task.page, run_.limits);
    const std::string objection = memory_objection(shape, job_.need(shape), memory_);
    if (!objection.empty()) throw Error(ErrorKind::kInput, task.name() + ": " + objection);
  }

  const FolderJob& job_;
  const RunSettings& run_;
  JobObserver& observer_;
  FolderResults& results_;
  const Pool pool_;
  const std::int64_t memory_;
  int number_ = 0;
  bool stopped_ = false;
};

}  // namespace

FolderCounts run_folder(const std::vector<fs::path>& inputs, const FolderJob& job,
                        const RunSettings& run, JobObserver& observer) {
  std::vector<InputFile> files = find_inputs(inputs, run.output);
  const GroupOf group_of = groups_of(files, run);
  keep_shard(run, files);
  if (run.dry_run) return dry_run(files, job, run, observer);

  prepare_output_folder(run.output);
  const FolderLock lock(run.output, run.shard.has_value());
  refuse_results_of_another_command(run.output, job.command);
  remove_leftovers_of_killed_runs(run.output, files);
  const Shard shard = run.shard.value_or(Shard{0, 0});
  FolderResults results({program_version(), job.command, job.settings, shard.number, shard.of}, run,
                        group_of);
  FieldLoop loop(job, run, observer, results);
  auto further = static_cast<int>(files.size());
  for (const InputFile& file : files) loop.do_file(file, --further);
  return results.finish();
}

FolderCounts segment_folder(const std::vector<fs::path>& inputs, const SegmentSettings& settings,
                            const RunSettings& run, JobObserver& observer) {
  LogPartitionMemo memo;
  const MaskDigest mask(settings.mask);
  const auto own = [&](const FieldTask& task) {
    SegmentSettings of_field = settings;
    of_field.mask_sha256 = mask.of(task);
    return of_field;
  };
  FolderJob job;
  job.command = kSegment;
  job.settings = named_settings(settings);
  job.settings_of = [&](const FieldTask& task) { return named_settings(own(task)); };
  job.need = [&](const PageShape& shape) { return need_of(shape, settings, run.threads); };
  job.run_field = [&](const FieldTask& task, const Pool& pool) {
    return segment_field(task, own(task), run, pool, observer, memo);
  };
  return run_folder(inputs, job, run, observer);
}

FolderCounts denoise_folder(const std::vector<fs::path>& inputs, const DenoiseSettings& settings,
                            const RunSettings& run, JobObserver& observer) {
  std::optional<PatchMixture> mixture;
  const MaskDigest mask(settings.mask);
  const auto own = [&](const FieldTask& task) {
    DenoiseSettings of_field = settings;
    of_field.mask_sha256 = mask.of(task);
    return of_field;
  };
  FolderJob job;
  job.command = kDenoise;
  job.settings = named_settings(settings);
  job.settings_of = [&](const FieldTask& task) { return named_settings(own(task)); };
  job.need = [&](const PageShape& shape) { return need_of(shape, settings, run.threads); };
  job.run_field = [&](const FieldTask& task, const Pool& pool) {
    return denoise_field(task, own(task), run, pool, observer, mixture ? &*mixture : nullptr);
  };
  if (settings.prior == PriorChoice::kPatches && !settings.learn_from.empty() && !run.dry_run) {
    mixture = learn_patches(settings, run.limits,
                            Pool(run.threads, [&] { return observer.stop_requested(); }), observer);
  }
  return run_folder(inputs, job, run, observer);
}

}  // namespace stillfield
