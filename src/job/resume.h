// Finished results of earlier runs.
#ifndef STILLFIELD_JOB_RESUME_H_
#define STILLFIELD_JOB_RESUME_H_

#include <filesystem>
#include <functional>
#include <optional>
#include <string>

#include "report/record.h"

namespace stillfield {

// Whether a record stands at `stem`, whatever it says.
bool has_record(const std::filesystem::path& stem);

// The record at `stem` if it bears the digest it should (of program version, input and settings),
// and all its files stand beside it with the size it states.
using DigestFor = std::function<std::string(const ImageRecord&)>;
std::optional<ImageRecord> finished_record(const std::filesystem::path& stem,
                                           const DigestFor& settings_digest);

}  // namespace stillfield

#endif  // STILLFIELD_JOB_RESUME_H_
