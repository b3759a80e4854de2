// One page of one input file, and where its results go.
#ifndef STILLFIELD_JOB_FIELD_TASK_H_
#define STILLFIELD_JOB_FIELD_TASK_H_

#include <filesystem>
#include <string>

#include "core/utf8.h"
#include "image/file_stamp.h"

namespace stillfield {

struct FieldTask {
  std::filesystem::path file;      // opens the image
  std::filesystem::path relative;  // its name in tables and records
  int page = 0;                    // counts from 0
  int pages = 1;
  std::filesystem::path stem;  // NAME of NAME.labels.tif, in the output folder
  std::string sha256;          // of the file; empty if it has not been needed yet
  int input = 0;               // which of the inputs it was found in, from 0
  FileStamp stamp;             // of the file before it was first read

  std::string name_in_tables() const { return utf8_name(relative.generic_string()); }

  // For sentences and progress: "FILE", or "FILE, page 3".
  std::string name() const {
    return file.string() + (pages > 1 ? ", page " + std::to_string(page + 1) : std::string());
  }
};

}  // namespace stillfield

#endif  // STILLFIELD_JOB_FIELD_TASK_H_
