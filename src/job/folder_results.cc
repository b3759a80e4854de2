#include "job/folder_results.h"

#include <utility>

#include "core/utf8.h"
#include "job/output_folder.h"

namespace stillfield {

namespace fs = std::filesystem;

FolderResults::FolderResults(const RunHead& head, const RunSettings& run, GroupOf group_of)
    : run_(run), group_of_(std::move(group_of)) {
  run_file_.emplace(run.output / (run.shard ? shard_file(*run.shard) : kRunFile), head);
  if (!run.shard) tables_.emplace(run.output, head.command);
}

void FolderResults::add(const FieldTask& task, const ImageRecord& record, bool finished_before) {
  ++(finished_before ? counts_.skipped : counts_.done);
  counts_.count_verdict(record);
  RunImage image = image_of(task, finished_before ? "skipped" : "done");
  take_verdict(record, image);
  const fs::path file = with_suffix(task.stem, kRecordSuffix);
  image.record = utf8_name(file.lexically_relative(run_.output).generic_string());
  write([&] {
    if (tables_) tables_->add(record, image.group, task.stem);
    run_file_->add(image);
  });
}

void FolderResults::add_failure(const FieldTask& task, const std::string& sentence) {
  ++counts_.failed;
  RunImage image = image_of(task, "failed");
  image.sentence = sentence;
  write([&] { run_file_->add(image); });
}

void FolderResults::add_not_reached(const FieldTask& task) {
  ++counts_.not_reached;
  counts_.interrupted = true;
  write([&] { run_file_->add(image_of(task, "not reached")); });
}

FolderCounts FolderResults::finish() {
  write([&] {
    if (tables_) tables_->commit();
    run_file_->commit(counts_.named());
    if (!run_.shard) remove_shard_files(run_.output);
  });
  if (first_error_) throw Error(*first_error_);
  return counts_;
}

RunImage FolderResults::image_of(const FieldTask& task, const char* status) const {
  RunImage image;
  image.image = task.name_in_tables();
  image.page = task.page + 1;
  image.input = task.input + 1;
  image.status = status;
  image.group = group_of_(image.image);
  return image;
}

void FolderResults::write(const std::function<void()>& writing) {
  if (first_error_) return;
  try {
    writing();
  } catch (const Error& error) {
    first_error_ = error;
    tables_.reset();
    run_file_.reset();
  }
}

}  // namespace stillfield
