// Groups of fields, for the summary.
//
// Folder   the default: the folder of the image, relative to the input; "." at its top
// File     a CSV file (report/csv_read.h) whose first line names the columns; `image` holds the
//          image as measurements.csv has it, or its file name alone where only one image of the run
//          has that name; a second column, `group` unless another is asked for, holds its group
// Rules    images that the file leaves out, and those with an empty group, are of group "";
//          all pages of a file are of one group; other columns are not looked at
#ifndef STILLFIELD_REPORT_FIELD_GROUPS_H_
#define STILLFIELD_REPORT_FIELD_GROUPS_H_

#include <filesystem>
#include <map>
#include <string>
#include <vector>

namespace stillfield {

// In the table of the summary, the group of all fields together; no group may bear the name.
inline constexpr char kAllFields[] = "(all)";

// Group of each image, by its name in the tables.
using FieldGroups = std::map<std::string, std::string>;

std::string folder_group(const std::string& image);

// Throws Error(kInput), naming file and line, if the file cannot be read, a column is missing, or a
// row names an image that is not there, that it cannot be told from another, or for a second time.
FieldGroups read_groups(const std::filesystem::path& file, const std::string& column,
                        const std::vector<std::string>& images);

}  // namespace stillfield

#endif  // STILLFIELD_REPORT_FIELD_GROUPS_H_
