#include "job/dry_run.h"

#include "core/error.h"

namespace stillfield {
namespace {

// Seconds of what is to do, by what is known of the speed.
class TimeEstimate {
 public:
  void add_finished(const ImageRecord& record) {
    const RunFacts& run = record.run;
    seconds_finished_ += run.read_seconds + run.sample_seconds + run.write_seconds;
    pixels_finished_ += static_cast<double>(record.input.width) * record.input.height;
  }
  void add_to_do(const PageShape& shape, const ResourceNeed& need) {
    pixels_to_do_ += static_cast<double>(shape.pixels());
    typical_ += need.seconds;
  }
  double seconds() const {
    return pixels_finished_ > 0 ? seconds_finished_ / pixels_finished_ * pixels_to_do_ : typical_;
  }

 private:
  double seconds_finished_ = 0;
  double pixels_finished_ = 0;
  double pixels_to_do_ = 0;
  double typical_ = 0;
};

}  // namespace

FolderCounts dry_run(const std::vector<InputFile>& files, const FolderJob& job,
                     const RunSettings& run, JobObserver& observer) {
  const std::int64_t memory = run.memory > 0 ? run.memory : available_memory();
  FolderCounts counts;
  TimeEstimate time;
  const auto look_at = [&](const PlannedField& field) {
    ListedField listed;
    listed.name = field.task.name();
    try {
      if (!field.failure.empty()) throw Error(ErrorKind::kInput, field.failure);
      const PageShape shape = page_shape(field.task.file, field.task.page, run.limits);
      const ResourceNeed need = job.need(shape);
      listed.width = shape.width;
      listed.height = shape.height;
      listed.bytes = need.bytes;
      if (field.finished) {
        ++counts.skipped;
        counts.count_verdict(*field.finished);
        time.add_finished(*field.finished);
        listed.state = "finished before";
      } else {
        const std::string objection = memory_objection(shape, need, memory);
        if (!objection.empty()) throw Error(ErrorKind::kInput, objection);
        ++counts.done;
        time.add_to_do(shape, need);
        listed.state = "to do";
      }
    } catch (const Error& error) {
      ++counts.failed;
      listed.state = error.what();
    }
    observer.listed(listed);
  };
  for (const InputFile& file : files) {
    if (observer.stop_requested()) throw Error(ErrorKind::kInterrupt, "stopped on request");
    for (const PlannedField& field : plan_file(file, job.settings_of, run)) look_at(field);
  }
  counts.seconds_to_do = time.seconds();
  return counts;
}

}  // namespace stillfield
