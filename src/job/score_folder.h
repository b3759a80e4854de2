// Results of a folder against a known truth.
//
// Truth     a folder with, for each result, an image under the input's relative name, with its
//           extension or another one of an image file. Of `segment`: classes 1..K by rising grey
//           value, 0 where nothing is known. Of `denoise`: the true intensities. A truth with as
//           many pages as the input is taken page by page, one page serves all pages
// Writes    score.csv and score.json into the results folder (report/score_tables.h)
#ifndef STILLFIELD_JOB_SCORE_FOLDER_H_
#define STILLFIELD_JOB_SCORE_FOLDER_H_

#include <filesystem>
#include <optional>
#include <string>
#include <vector>

#include "report/score_tables.h"

namespace stillfield {

struct FolderScore {
  std::vector<ImageScore> images;
  std::vector<std::string> failures;  // one sentence each
};

// peak: of PSNR and SSIM; none: the range of the truth's integer type, or of its values for floats.
// Throws Error(kInput) if a folder is missing or holds no record.
FolderScore score_folder(const std::filesystem::path& results, const std::filesystem::path& truth,
                         std::optional<double> peak);

}  // namespace stillfield

#endif  // STILLFIELD_JOB_SCORE_FOLDER_H_
