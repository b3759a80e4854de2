// The folder for results, and files in it that only change when their content does.
#ifndef STILLFIELD_JOB_OUTPUT_FOLDER_H_
#define STILLFIELD_JOB_OUTPUT_FOLDER_H_

#include <filesystem>
#include <string>
#include <vector>

namespace stillfield {

// Makes the folder if need be and checks that files can be written there, before any work is done.
// Throws Error(kUsage) if `folder` is a file, Error(kOutput) if it cannot be made or written to.
void prepare_output_folder(const std::filesystem::path& folder);

// Leaves a file alone that holds `text` already. Throws Error(kOutput).
void write_if_changed(const std::filesystem::path& file, const std::string& text);

// "a/b" and ".labels.tif" -> "a/b.labels.tif"; dots in b stay.
std::filesystem::path with_suffix(std::filesystem::path stem, const std::string& suffix);

// Stems of all records below `folder`, in byte order.
std::vector<std::filesystem::path> record_stems(const std::filesystem::path& folder);

// Run files of shards in the folder, in the order of their numbers.
std::vector<std::filesystem::path> shard_files(const std::filesystem::path& folder);

// After a run of all images they say nothing any more.
void remove_shard_files(const std::filesystem::path& folder);

}  // namespace stillfield

#endif  // STILLFIELD_JOB_OUTPUT_FOLDER_H_
