// An 8-bit picture of restored intensities, for eyes alone.
#ifndef STILLFIELD_JOB_PREVIEW_H_
#define STILLFIELD_JOB_PREVIEW_H_

#include <filesystem>
#include <vector>

#include "core/volume.h"

namespace stillfield {

// One plane (grey) or three (red, green, blue). Black and white are the 0.2 % and 99.8 % quantiles
// over all planes.
void write_preview(const std::filesystem::path& file,
                   const std::vector<const Volume<float>*>& planes);

}  // namespace stillfield

#endif  // STILLFIELD_JOB_PREVIEW_H_
