#include "job/output_folder.h"

#include <algorithm>
#include <fstream>
#include <iterator>

#include "core/error.h"
#include "image/atomic_file.h"
#include "job/shard.h"
#include "report/record.h"

namespace stillfield {

namespace fs = std::filesystem;

void prepare_output_folder(const fs::path& folder) {
  std::error_code error;
  const fs::file_status status = fs::status(folder, error);
  if (fs::exists(status) && !fs::is_directory(status)) {
    throw Error(ErrorKind::kUsage, folder.string() +
                                       ": is a file, and results need a folder; give --out the "
                                       "name of a folder, which may be new");
  }
  if (!fs::exists(status)) fs::create_directories(folder, error);
  if (error) {
    throw Error(ErrorKind::kOutput, folder.string() + ": the output folder cannot be made (" +
                                        error.message() + "); choose a place with write access");
  }
  const AtomicFile probe(folder / "run.json");  // opens a temporary file and removes it
}

void write_if_changed(const fs::path& file, const std::string& text) {
  std::ifstream stream(file, std::ios::binary);
  if (stream && std::string(std::istreambuf_iterator<char>(stream), {}) == text) return;
  write_text_atomically(file, text);
}

std::vector<fs::path> record_stems(const fs::path& folder) {
  const std::string suffix = kRecordSuffix;
  std::vector<fs::path> stems;
  const auto options = fs::directory_options::skip_permission_denied;
  for (const auto& entry : fs::recursive_directory_iterator(folder, options)) {
    const std::string name = entry.path().string();
    if (!name.ends_with(suffix) || !entry.is_regular_file()) continue;
    stems.emplace_back(name.substr(0, name.size() - suffix.size()));
  }
  std::sort(stems.begin(), stems.end());
  return stems;
}

std::vector<fs::path> shard_files(const fs::path& folder) {
  std::vector<fs::path> files;
  std::error_code error;
  fs::directory_iterator it(folder, error);
  for (; !error && it != fs::directory_iterator(); it.increment(error)) {
    if (shard_of_file(it->path().filename().string())) files.push_back(it->path());
  }
  const auto number = [](const fs::path& file) {
    const Shard shard = *shard_of_file(file.filename().string());
    return std::pair(shard.of, shard.number);
  };
  std::sort(files.begin(), files.end(),
            [&](const fs::path& a, const fs::path& b) { return number(a) < number(b); });
  return files;
}

void remove_shard_files(const fs::path& folder) {
  std::error_code ignored;
  for (const fs::path& file : shard_files(folder)) fs::remove(file, ignored);
}

fs::path with_suffix(fs::path stem, const std::string& suffix) {
  stem += suffix;
  return stem;
}

}  // namespace stillfield
