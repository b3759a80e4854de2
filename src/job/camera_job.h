// A camera's noise model from folders of dark and flat frames.
//
// Dark      every page of every image: frames taken without light
// Flat      evenly lit frames at several levels: each sub-folder is a level; without sub-folders
// each
//           file with several pages is one. At least two frames a level
// Exposure  when every level's name is a number (as 0.5, 2ms, 10), possibly with a unit, it is
// taken
//           as proportional to the light, and the linearity is judged
// Writes    FILE (JSON), and beside it FILE's stem with .transfer.csv (levels, for a plot),
//           .offset.tif (mean dark value of each pixel) and .hot-pixels.tif (1: hot)
#ifndef STILLFIELD_JOB_CAMERA_JOB_H_
#define STILLFIELD_JOB_CAMERA_JOB_H_

#include <filesystem>

#include "image/read.h"
#include "job/observer.h"
#include "report/camera_file.h"

namespace stillfield {

// Throws Error(kInput) with one sentence that names the file or folder, Error(kOutput),
// Error(kInterrupt).
CameraFacts measure_camera(const std::filesystem::path& dark, const std::filesystem::path& flat,
                           const std::filesystem::path& output, const ReadLimits& limits,
                           JobObserver& observer);

}  // namespace stillfield

#endif  // STILLFIELD_JOB_CAMERA_JOB_H_
