#include "image/walk.h"

#include <algorithm>
#include <set>
#include <string>
#include <string_view>
#include <unordered_set>

#include "core/error.h"
#include "core/utf8.h"
#include "image/output_names.h"

namespace stillfield {
namespace {

namespace fs = std::filesystem;

constexpr std::string_view kExtensions[] = {".png", ".jpg", ".jpeg", ".bmp", ".pgm",
                                            ".ppm", ".pnm", ".pbm",  ".tif", ".tiff"};

[[noreturn]] void throw_path(ErrorKind kind, const fs::path& path, const std::string& what) {
  throw Error(kind, path.string() + ": " + what);
}

std::string known_extensions() {
  std::string list;
  for (const auto extension : kExtensions) list.append(" ").append(extension.substr(1));
  return list;
}

bool is_hidden(const fs::path& path) {
  return path.filename().native().starts_with('.');
}

fs::path real_path(const fs::path& path) {
  std::error_code error;
  fs::path found = fs::weakly_canonical(path, error);
  return error ? path.lexically_normal() : found;
}

// Whether `inner` is `outer` or lies below it; both canonical.
bool is_within(const fs::path& inner, const fs::path& outer) {
  return std::mismatch(outer.begin(), outer.end(), inner.begin(), inner.end()).first == outer.end();
}

std::vector<fs::directory_entry> sorted_entries(const fs::path& folder) {
  std::error_code error;
  std::vector<fs::directory_entry> entries;
  fs::directory_iterator it(folder, error);
  for (; !error && it != fs::directory_iterator(); it.increment(error)) entries.push_back(*it);
  if (error) {
    throw_path(ErrorKind::kInput, folder,
               "the folder cannot be listed (" + error.message() + "); change its access rights");
  }
  std::sort(entries.begin(), entries.end(),
            [](const fs::directory_entry& a, const fs::directory_entry& b) {
              return a.path().native() < b.path().native();
            });
  return entries;
}

// Byte order of the names as tables show them.
bool comes_before(const InputFile& a, const InputFile& b) {
  const std::string& left = a.relative.native();
  const std::string& right = b.relative.native();
  const std::string left_name = utf8_name(left);
  const std::string right_name = utf8_name(right);
  return left_name != right_name ? left_name < right_name : left < right;
}

class Walker {
 public:
  explicit Walker(const fs::path& output_folder)
      : output_folder_(output_folder.empty() ? fs::path() : real_path(output_folder)) {}

  void start_input(int number) { input_ = number; }

  void add_file(const fs::path& path, const fs::path& relative) {
    add_real_file(path, relative, real_path(path));
  }

  // `prefix` is where the folder's mirror starts below the output folder.
  void add_folder(const fs::path& folder, const fs::path& prefix) {
    const fs::path real = real_path(folder);
    if (!output_folder_.empty() && real == output_folder_) {
      throw_path(ErrorKind::kUsage, folder,
                 "is both an input and the output folder; choose another output folder");
    }
    if (folders_seen_.contains(real)) return;
    const std::size_t images_before = images_met_;
    const std::size_t first = files_.size();
    folders_seen_.insert(real);
    walk(real, prefix, sorted_entries(folder));
    std::sort(files_.begin() + static_cast<std::ptrdiff_t>(first), files_.end(), comes_before);
    if (images_met_ == images_before) {
      throw_path(ErrorKind::kInput, folder,
                 "no image in this folder or below it; files ending in" + known_extensions() +
                     " were looked for");
    }
  }

  std::vector<InputFile> take() {
    assign_output_names(files_);
    return std::move(files_);
  }

 private:
  void add_real_file(const fs::path& path, const fs::path& relative, const fs::path& real) {
    if (!files_seen_.insert(real.native()).second) return;
    files_.push_back({path, relative, {}, input_, {}});
  }

  void walk(const fs::path& real, const fs::path& relative,
            const std::vector<fs::directory_entry>& entries) {
    for (const fs::directory_entry& entry : entries) {
      const fs::path& path = entry.path();
      if (is_hidden(path)) continue;
      const fs::path below = relative / path.filename();
      std::error_code ignored;
      if (entry.is_directory(ignored)) {
        walk_inner(path, real, below);
      } else if (has_image_extension(path)) {
        ++images_met_;
        const bool link = entry.is_symlink(ignored);
        add_real_file(path, below, link ? real_path(path) : real / path.filename());
      }
    }
  }

  void walk_inner(const fs::path& folder, const fs::path& real_parent, const fs::path& relative) {
    const fs::path real = real_path(folder);
    const bool leads_back = is_within(real_parent, real);
    const bool is_output = !output_folder_.empty() && real == output_folder_;
    if (leads_back || is_output || !folders_seen_.insert(real).second) return;
    std::vector<fs::directory_entry> entries;
    try {
      entries = sorted_entries(folder);
    } catch (const Error& error) {
      ++images_met_;  // there may be some
      files_.push_back({folder, relative, {}, input_, error.what()});
      return;
    }
    walk(real, relative, entries);
  }

  fs::path output_folder_;
  int input_ = 0;
  std::vector<InputFile> files_;
  std::unordered_set<std::string> files_seen_;  // canonical
  std::set<fs::path> folders_seen_;             // canonical
  std::size_t images_met_ = 0;                  // in folders, duplicates too
};

// Own name of a folder, made unique among those handed out before.
fs::path mirror_name(const fs::path& folder, std::set<std::string>& taken) {
  const std::string own = real_path(folder).filename().string();
  std::string name = own;
  for (int n = 2; !taken.insert(name).second; ++n) name = own + "-" + std::to_string(n);
  return name;
}

}  // namespace

bool has_image_extension(const fs::path& path) {
  std::string extension = path.extension().string();
  for (char& c : extension) c = c >= 'A' && c <= 'Z' ? static_cast<char>(c - 'A' + 'a') : c;
  return std::find(std::begin(kExtensions), std::end(kExtensions), extension) !=
         std::end(kExtensions);
}

std::vector<InputFile> find_inputs(const std::vector<fs::path>& inputs,
                                   const fs::path& output_folder) {
  std::set<fs::path> folders;
  for (const auto& input : inputs) {
    std::error_code error;
    const fs::file_status status = fs::status(input, error);
    if (status.type() == fs::file_type::not_found) {
      throw_path(ErrorKind::kInput, input,
                 "there is no such file or folder; check the spelling of the path");
    }
    if (!fs::status_known(status)) {
      throw_path(ErrorKind::kInput, input,
                 "cannot be looked at (" + error.message() + "); check its access rights");
    }
    if (fs::is_directory(status)) folders.insert(real_path(input));
  }

  Walker walker(output_folder);
  std::set<std::string> names;
  std::set<fs::path> mirrored;
  int number = 0;
  for (const auto& input : inputs) {
    walker.start_input(number++);
    if (!fs::is_directory(input)) {
      walker.add_file(input, input.filename());
    } else if (mirrored.insert(real_path(input)).second) {
      walker.add_folder(input, folders.size() > 1 ? mirror_name(input, names) : fs::path());
    }
  }
  return walker.take();
}

std::vector<InputFile> find_all_inputs(const std::vector<fs::path>& inputs) {
  std::vector<InputFile> files = find_inputs(inputs, {});
  for (const InputFile& file : files) {
    if (!file.failure.empty()) throw Error(ErrorKind::kInput, file.failure);
  }
  return files;
}

}  // namespace stillfield
