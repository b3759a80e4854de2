// Restored intensities in the sample type of the file they come from.
#ifndef STILLFIELD_IMAGE_WRITE_ROUNDED_H_
#define STILLFIELD_IMAGE_WRITE_ROUNDED_H_

#include <filesystem>
#include <vector>

#include "image/field.h"
#include "image/write.h"

namespace stillfield {

// Whether samples of this format can be written as integers again.
bool keeps_integers(const SampleFormat& format);

// One page of one or three channels, rounded (halves up) and limited to the range of `format`, in
// the narrowest type that holds it: 12 bits go into 16. NaN becomes 0, the nearest to it in the
// range. Throws Error(kOutput).
void write_rounded_tiff(const std::filesystem::path& path,
                        const std::vector<View<const float>>& channels, const SampleFormat& format,
                        const TiffOptions& options);

}  // namespace stillfield

#endif  // STILLFIELD_IMAGE_WRITE_ROUNDED_H_
