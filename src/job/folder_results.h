// What a run on a folder leaves behind beside the results of its images: the run file and, unless
// it is a shard, the tables of the folder.
//
// Errors   a table that cannot be written does not stop the run: the images go on, finish() throws
//          Error(kOutput) at its end, and `stillfield report` makes the tables anew
#ifndef STILLFIELD_JOB_FOLDER_RESULTS_H_
#define STILLFIELD_JOB_FOLDER_RESULTS_H_

#include <functional>
#include <optional>
#include <string>

#include "core/error.h"
#include "job/field_task.h"
#include "job/folder_counts.h"
#include "job/settings.h"
#include "job/table_files.h"

namespace stillfield {

// Group of an image, by its name in the tables.
using GroupOf = std::function<std::string(const std::string& image)>;

class FolderResults {
 public:
  // Opens the files. Throws Error(kOutput).
  FolderResults(const RunHead& head, const RunSettings& run, GroupOf group_of);

  void add(const FieldTask& task, const ImageRecord& record, bool finished_before);
  void add_failure(const FieldTask& task, const std::string& sentence);
  void add_not_reached(const FieldTask& task);

  FolderCounts finish();

 private:
  RunImage image_of(const FieldTask& task, const char* status) const;
  void write(const std::function<void()>& writing);

  const RunSettings& run_;
  GroupOf group_of_;
  FolderCounts counts_;
  std::optional<RunFile> run_file_;
  std::optional<TableFiles> tables_;
  std::optional<Error> first_error_;
};

}  // namespace stillfield

#endif  // STILLFIELD_JOB_FOLDER_RESULTS_H_
