#include "job/output_folder.h"

#include <fstream>
#include <iterator>

#include "core/error.h"
#include "image/atomic_file.h"

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

fs::path with_suffix(fs::path stem, const std::string& suffix) {
  stem += suffix;
  return stem;
}

}  // namespace stillfield
