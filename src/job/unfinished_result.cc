#include "job/unfinished_result.h"

#include <utility>

#include "core/error.h"
#include "job/output_folder.h"
#include "job/resume.h"

namespace stillfield {
namespace {

namespace fs = std::filesystem;

void remove_outputs(const fs::path& stem, const ImageRecord& record) {
  std::error_code ignored;
  for (const OutputFile& output : record.outputs) {
    const bool plain = fs::path(output.suffix).filename() == output.suffix;  // no way out of here
    if (plain && output.suffix.starts_with('.'))
      fs::remove(with_suffix(stem, output.suffix), ignored);
  }
}

}  // namespace

// The record goes last, so that a run that is killed here finds the list again.
UnfinishedResult::UnfinishedResult(fs::path stem, const ImageRecord& record)
    : stem_(std::move(stem)), record_(record) {
  if (!has_record(stem_)) return;
  const fs::path file = with_suffix(stem_, kRecordSuffix);
  try {
    remove_outputs(stem_, read_record(file));
  } catch (const Error&) {
    // A damaged record lists nothing; its files are written anew below the same names.
  }
  std::error_code error;
  fs::remove(file, error);
  if (error) {
    throw Error(ErrorKind::kOutput, file.string() +
                                        ": the record of an earlier run cannot be "
                                        "removed (" +
                                        error.message() +
                                        "); choose an output folder with write access");
  }
}

UnfinishedResult::~UnfinishedResult() {
  if (!has_record(stem_)) remove_outputs(stem_, record_);
}

}  // namespace stillfield
