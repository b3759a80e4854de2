#include "report/field_groups.h"

#include <algorithm>
#include <set>

#include "core/error.h"
#include "image/file_bytes.h"
#include "report/csv_read.h"

namespace stillfield {
namespace {

namespace fs = std::filesystem;

std::size_t column_of(const CsvRow& header, const std::string& name, const fs::path& file) {
  const auto at = std::find(header.fields.begin(), header.fields.end(), name);
  if (at == header.fields.end()) {
    throw_input(file, "has no column `" + name +
                          "`; its first line must name the columns, separated by commas, among "
                          "them `image` and that of the groups");
  }
  return static_cast<std::size_t>(at - header.fields.begin());
}

// Finds the image of the run that a row means.
class ImageNames {
 public:
  explicit ImageNames(const std::vector<std::string>& images)
      : images_(images.begin(), images.end()) {
    for (const std::string& image : images_) {
      const std::string name = fs::path(image).filename().string();
      const auto [other, is_new] = by_file_name_.try_emplace(name, image, "");
      if (!is_new && other->second.second.empty()) other->second.second = image;
    }
  }

  std::string meant(const std::string& name) const {
    if (images_.contains(name)) return name;
    const auto found = by_file_name_.find(name);
    if (found == by_file_name_.end()) {
      throw Error(ErrorKind::kInput,
                  "names `" + name +
                      "`, which is not among the images of this run; correct the name as "
                      "measurements.csv would have it, or leave the line out");
    }
    const auto& [image, another] = found->second;
    if (!another.empty()) {
      throw Error(ErrorKind::kInput, "`" + name + "` may be " + image + " or " + another +
                                         "; write the image with its folder");
    }
    return image;
  }

 private:
  std::set<std::string> images_;
  std::map<std::string, std::pair<std::string, std::string>> by_file_name_;  // first two images
};

std::vector<CsvRow> rows_of(const fs::path& file) {
  const std::vector<std::byte> bytes = read_whole(file);
  return parse_csv({reinterpret_cast<const char*>(bytes.data()), bytes.size()});
}

void take_row(const CsvRow& row, std::size_t image_at, std::size_t group_at,
              const ImageNames& images, std::set<std::string>& seen, FieldGroups& groups) {
  if (row.fields.size() <= std::max(image_at, group_at)) {
    throw Error(ErrorKind::kInput, "has fewer fields than the first line names columns");
  }
  const std::string image = images.meant(row.fields[image_at]);
  if (!seen.insert(image).second) {
    throw Error(ErrorKind::kInput, "names " + image + " a second time; leave one line out");
  }
  if (row.fields[group_at] == kAllFields) {
    throw Error(ErrorKind::kInput, std::string("a group must not be called ") + kAllFields +
                                       ": the rows of all fields together bear that name");
  }
  groups[image] = row.fields[group_at];
}

}  // namespace

std::string folder_group(const std::string& image) {
  const std::string folder = fs::path(image).parent_path().generic_string();
  return folder.empty() ? "." : folder;
}

FieldGroups read_groups(const fs::path& file, const std::string& column,
                        const std::vector<std::string>& images) {
  FieldGroups groups;
  for (const std::string& image : images) groups[image] = "";
  int line = 0;
  try {
    const std::vector<CsvRow> rows = rows_of(file);
    if (rows.empty()) throw_input(file, "holds no line");
    const std::size_t image_at = column_of(rows.front(), "image", file);
    const std::size_t group_at = column_of(rows.front(), column, file);
    const ImageNames names(images);
    std::set<std::string> seen;
    for (std::size_t i = 1; i < rows.size(); ++i) {
      line = rows[i].line;
      take_row(rows[i], image_at, group_at, names, seen, groups);
    }
  } catch (const Error& error) {
    const std::string sentence = error.what();
    if (sentence.starts_with(file.string())) throw;
    throw_input(file, (line > 0 ? "line " + std::to_string(line) + ": " : "") + sentence);
  }
  return groups;
}

}  // namespace stillfield
