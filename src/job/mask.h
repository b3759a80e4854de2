// Masks: which pixels of an image may be used.
#ifndef STILLFIELD_JOB_MASK_H_
#define STILLFIELD_JOB_MASK_H_

#include <cstdint>
#include <filesystem>
#include <string>

#include "core/volume.h"
#include "image/read.h"
#include "job/field_task.h"

namespace stillfield {

// 1 for pixels to use, 0 for pixels whose mask is 0 or not a number. `mask`: empty (all are used),
// an image file for all fields, or a folder with a file under the relative name of each input, in
// the extension of the input or in .png, .tif. A mask of one page serves all pages. Throws
// Error(kInput) if there is no mask for the field, or its size differs.
Volume<std::uint8_t> read_mask(const std::filesystem::path& mask, const FieldTask& task,
                               const Extent& extent, const ReadLimits& limits);

// SHA-256 of the mask of a field, so that a changed mask does its image again and no other; of one
// file for all it is taken once. Throws Error(kInput) as read_mask() does.
class MaskDigest {
 public:
  explicit MaskDigest(std::filesystem::path mask);
  std::string of(const FieldTask& task) const;

 private:
  std::filesystem::path mask_;
  std::string of_file_;  // empty for a folder
};

}  // namespace stillfield

#endif  // STILLFIELD_JOB_MASK_H_
