// The files of a whole folder while they are written, image by image: nothing is kept in memory.
//
// They grow under temporary names and get their own at commit(), unless they hold the same bytes
// already (image/atomic_file.h). Errors  Error(kOutput); of add() Error(kInput) if the image's
// particles cannot be read, before anything of the image is added
#ifndef STILLFIELD_JOB_TABLE_FILES_H_
#define STILLFIELD_JOB_TABLE_FILES_H_

#include <filesystem>
#include <optional>
#include <string>
#include <utility>
#include <vector>

#include "image/atomic_file.h"
#include "report/run.h"
#include "report/tables.h"

namespace stillfield {

inline constexpr char kRunFile[] = "run.json";

// measurements.csv and summary.csv; of segment also checks.csv and particles.csv.
class TableFiles {
 public:
  TableFiles(const std::filesystem::path& folder, const std::string& command);

  // `stem`: NAME of NAME.record.json with its folder.
  void add(const ImageRecord& record, const std::string& group, const std::filesystem::path& stem);
  void commit();

 private:
  struct OwnFile {
    OwnFile(const std::filesystem::path& name, CsvTable header)
        : file(name), table(std::move(header)) {}

    AtomicFile file;
    CsvTable table;
  };

  std::filesystem::path folder_;
  OwnFile measurements_;
  SummaryTable summary_;
  std::optional<OwnFile> checks_;
  std::optional<AtomicFile> particles_;
};

// run.json, or the same of a shard.
class RunFile {
 public:
  RunFile(const std::filesystem::path& file, const RunHead& head);

  void add(const RunImage& image);
  void commit(const std::vector<NamedValue>& counts);

 private:
  AtomicFile file_;
  bool first_ = true;
};

// What the record says of its image, in the entry of the image.
void take_verdict(const ImageRecord& record, RunImage& image);

}  // namespace stillfield

#endif  // STILLFIELD_JOB_TABLE_FILES_H_
