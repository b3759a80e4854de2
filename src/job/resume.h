// Finished results of earlier runs.
#ifndef STILLFIELD_JOB_RESUME_H_
#define STILLFIELD_JOB_RESUME_H_

#include <filesystem>
#include <optional>
#include <string>

#include "report/record.h"

namespace stillfield {

// Whether a record stands at `stem`, whatever it says.
bool has_record(const std::filesystem::path& stem);

// The record at `stem` if it was made by this version of the program from the same input with the
// same settings, and all its files stand beside it with the size it states.
std::optional<ImageRecord> finished_record(const std::filesystem::path& stem,
                                           const std::string& settings_digest);

}  // namespace stillfield

#endif  // STILLFIELD_JOB_RESUME_H_
