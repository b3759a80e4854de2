#include "job/report_folder.h"

#include <algorithm>
#include <optional>
#include <tuple>

#include "core/error.h"
#include "core/utf8.h"
#include "job/output_folder.h"
#include "job/shard.h"
#include "job/table_files.h"
#include "report/field_groups.h"

namespace stillfield {
namespace {

namespace fs = std::filesystem;

struct Listing {
  RunHead head;
  std::vector<RunImage> images;
  std::vector<std::string> missing;  // sentences
};

bool same_run(const RunHead& a, const RunHead& b) {
  return a.version == b.version && a.command == b.command && a.settings == b.settings &&
         a.shards == b.shards;
}

Listing listed_by_shards(const std::vector<fs::path>& files) {
  Listing list;
  std::vector<bool> there;
  for (const fs::path& file : files) {
    const RunHead head =
        read_run(file, [&list](RunImage image) { list.images.push_back(std::move(image)); });
    if (there.empty()) {
      list.head = head;
      there.resize(static_cast<std::size_t>(head.shards));
    } else if (!same_run(head, list.head)) {
      throw Error(ErrorKind::kInput,
                  file.string() + ": is a part of another run than " +
                      files.front().filename().string() +
                      " (version, command, settings or number of parts differ); run all parts "
                      "alike, and delete the run files of parts that no longer count");
    }
    if (head.shard >= 1 && head.shard <= head.shards) {
      there[static_cast<std::size_t>(head.shard - 1)] = true;
    }
  }
  for (std::size_t i = 0; i < there.size(); ++i) {
    if (there[i]) continue;
    list.missing.push_back("part " + std::to_string(i + 1) + " of " + std::to_string(there.size()) +
                           " has not ended yet: its images are not in the tables; run it with "
                           "--shard " +
                           std::to_string(i + 1) + "/" + std::to_string(there.size()));
  }
  list.head.shard = 0;
  list.head.shards = 0;
  const auto place = [](const RunImage& i) { return std::tie(i.input, i.image, i.record, i.page); };
  std::stable_sort(list.images.begin(), list.images.end(),
                   [&](const RunImage& a, const RunImage& b) { return place(a) < place(b); });
  return list;
}

std::vector<NamedValue> settings_of_run(const ImageRecord& record) {
  std::vector<NamedValue> settings = record.settings;
  std::erase_if(settings, [](const NamedValue& s) { return s.name == "mask_sha256"; });
  return settings;
}

Listing listed_by_records(const fs::path& folder) {
  Listing list;
  for (const fs::path& stem : record_stems(folder)) {
    const fs::path file = with_suffix(stem, kRecordSuffix);
    const ImageRecord record = read_record(file);
    const RunHead head{record.version, record.command, settings_of_run(record), 0, 0};
    if (list.images.empty()) list.head = head;
    if (!same_run(head, list.head)) {
      throw Error(ErrorKind::kInput, file.string() +
                                         ": was made with other settings than the records before "
                                         "it; run the command again over all images");
    }
    RunImage image;
    image.image = record.input.path;
    image.page = record.input.page;
    image.status = "done";
    image.group = folder_group(image.image);
    image.record = utf8_name(file.lexically_relative(folder).generic_string());
    list.images.push_back(std::move(image));
  }
  if (list.images.empty()) {
    throw Error(ErrorKind::kInput, folder.string() +
                                       ": holds no results of this program; name the folder that "
                                       "was given to --out");
  }
  return list;
}

Listing listing_of(const fs::path& folder) {
  const std::vector<fs::path> shards = shard_files(folder);
  if (!shards.empty()) return listed_by_shards(shards);
  if (!fs::exists(folder / kRunFile)) return listed_by_records(folder);
  Listing list;
  list.head = read_run(folder / kRunFile,
                       [&list](RunImage image) { list.images.push_back(std::move(image)); });
  return list;
}

// The file that a run file calls `name`: file names that are not UTF-8 stand there changed.
fs::path file_called(const fs::path& folder, const std::string& name) {
  const fs::path exact = folder / name;
  std::error_code error;
  if (fs::exists(exact, error)) return exact;
  for (fs::recursive_directory_iterator it(folder, error), end; !error && it != end;
       it.increment(error)) {
    if (utf8_name(it->path().lexically_relative(folder).generic_string()) == name) {
      return it->path();
    }
  }
  return exact;
}

class Rebuilding {
 public:
  Rebuilding(const fs::path& folder, const RunHead& head)
      : folder_(folder), tables_(folder, head.command), run_file_(folder / kRunFile, head) {}

  void add(RunImage image) {
    if (!image.record.empty()) add_record(image);
    FolderCounts& counts = report_.counts;
    counts.done += image.status == "done" ? 1 : 0;
    counts.skipped += image.status == "skipped" ? 1 : 0;
    counts.failed += image.status == "failed" ? 1 : 0;
    counts.not_reached += image.status == "not reached" ? 1 : 0;
    if (image.status == "failed") report_.failures.push_back(image.sentence);
    run_file_.add(image);
  }

  FolderReport finish() {
    tables_.commit();
    run_file_.commit(report_.counts.named());
    return std::move(report_);
  }

 private:
  void add_record(RunImage& image) {
    try {
      const fs::path file = file_called(folder_, image.record);
      const std::string name = file.string();
      const ImageRecord record = read_record(file);
      tables_.add(record, image.group, name.substr(0, name.size() - (sizeof kRecordSuffix - 1)));
      take_verdict(record, image);
      report_.counts.count_verdict(record);
    } catch (const Error& error) {
      if (error.kind() != ErrorKind::kInput) throw;
      image.status = "failed";
      image.sentence = error.what();
      image.converged = false;
      image.record.clear();
    }
  }

  fs::path folder_;
  TableFiles tables_;
  RunFile run_file_;
  FolderReport report_;
};

}  // namespace

FolderReport report_folder(const fs::path& folder) {
  if (!fs::is_directory(folder)) {
    throw Error(ErrorKind::kInput,
                folder.string() + ": there is no such folder; check the spelling of the path");
  }
  Listing list = listing_of(folder);
  Rebuilding rebuilding(folder, list.head);
  for (RunImage& image : list.images) rebuilding.add(std::move(image));
  FolderReport report = rebuilding.finish();
  report.failures.insert(report.failures.end(), list.missing.begin(), list.missing.end());
  return report;
}

}  // namespace stillfield
