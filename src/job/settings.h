// What a run of `segment` is asked to do.
#ifndef STILLFIELD_JOB_SETTINGS_H_
#define STILLFIELD_JOB_SETTINGS_H_

#include <cstdint>
#include <filesystem>
#include <optional>
#include <string>
#include <vector>

#include "diagnose/verdict.h"
#include "image/read.h"
#include "job/light_files.h"
#include "job/shard.h"
#include "measure/particles.h"
#include "model/neighbourhood.h"
#include "report/named_value.h"
#include "sampler/coupling.h"
#include "sampler/schedule.h"

namespace stillfield {

// The optics' blur: estimated, left out, or given in pixels (standard deviation).
enum class BlurMode { kAuto, kNone, kGiven };
struct BlurSettings {
  BlurMode mode = BlurMode::kNone;
  double value = 0.0;  // for kGiven
};

// Uneven light (job/restore_shaded.h): modelled where it shows, left out, or modelled with so many
// coefficients along a side.
enum class ShadingMode { kAuto, kNone, kGiven };
struct ShadingSettings {
  ShadingMode mode = ShadingMode::kNone;
  int coefficients = 0;  // for kGiven
};

inline constexpr int kAutoClasses = 0;  // chosen by the data (job/choose_classes.h)

// Settings that change results; all of them stand in the record.
struct SegmentSettings {
  int classes = 2;  // 2..64, or kAutoClasses
  Connectivity connectivity = Connectivity::kFour;
  CouplingSettings coupling;
  bool shared_variance = false;
  BlurSettings blur;
  ShadingSettings shading;
  int chains = 4;  // 2..16
  std::uint64_t seed = 1;
  ScheduleSettings schedule;
  ConvergenceTarget target;
  int replicates = 20;  // of the bootstrap (job/bootstrap.h): even, from 6; 0: none
  ParticleSettings particles;
  std::optional<double> pixel_size_um;  // > 0; overrides that of the file
  std::filesystem::path mask;           // file, or folder of files named as the images; 0 = outside
  std::string mask_sha256;              // of the mask of the image at hand (job/mask.h)
  LightFiles light;
};

// Settings that do not.
struct RunSettings {
  std::filesystem::path output;
  int threads = 1;
  bool redo = false;  // do again what is finished
  ReadLimits limits;
  std::filesystem::path group_file;  // of the summary's groups; empty: by folder
  std::string group_column = "group";
  std::optional<Shard> shard;  // a part of the images; empty: all
  std::int64_t memory = 0;     // bytes a run may use; 0: what is free when it begins
  bool dry_run = false;        // say what would be done, write nothing
};

// All of them under the names of the record.
std::vector<NamedValue> named_settings(const SegmentSettings& settings);

}  // namespace stillfield

#endif  // STILLFIELD_JOB_SETTINGS_H_
