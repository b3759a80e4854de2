#include "job/resume.h"

#include <algorithm>

#include "core/error.h"
#include "job/output_folder.h"

namespace stillfield {

namespace fs = std::filesystem;

bool has_record(const fs::path& stem) {
  std::error_code ignored;
  return fs::is_regular_file(with_suffix(stem, kRecordSuffix), ignored);
}

std::optional<ImageRecord> finished_record(const fs::path& stem, const DigestFor& settings_digest) {
  if (!has_record(stem)) return std::nullopt;
  try {
    ImageRecord record = read_record(with_suffix(stem, kRecordSuffix));
    const auto is_there = [&stem](const OutputFile& output) {
      std::error_code error;
      const auto size = fs::file_size(with_suffix(stem, output.suffix), error);
      return !error && size == static_cast<std::uintmax_t>(output.bytes);
    };
    const bool complete = record.settings_digest == settings_digest(record) &&
                          !record.outputs.empty() &&
                          std::all_of(record.outputs.begin(), record.outputs.end(), is_there);
    return complete ? std::optional(std::move(record)) : std::nullopt;
  } catch (const Error&) {
    return std::nullopt;  // a damaged record is no finished result
  }
}

}  // namespace stillfield
