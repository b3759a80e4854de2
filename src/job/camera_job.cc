#include "job/camera_job.h"

#include <algorithm>
#include <charconv>
#include <map>
#include <optional>

#include "core/error.h"
#include "image/atomic_file.h"
#include "image/walk.h"
#include "image/write.h"
#include "model/camera_fit.h"
#include "report/versions.h"

namespace stillfield {
namespace {

namespace fs = std::filesystem;

struct Frames {
  std::string name;
  double level = 0;  // exposure, or a number from 1
  std::vector<fs::path> files;
};

// The number a name begins with.
std::optional<double> exposure_of(const std::string& name) {
  double value = 0;
  const auto [end, error] = std::from_chars(name.data(), name.data() + name.size(), value);
  return error == std::errc{} && value > 0 ? std::optional(value) : std::nullopt;
}

void require_folder(const fs::path& folder) {
  if (fs::is_directory(folder)) return;
  throw Error(ErrorKind::kInput,
              folder.string() + ": there is no such folder; check the spelling of the path");
}

// The levels of a folder of flats, in the order of their names.
std::vector<Frames> flat_levels(const fs::path& folder) {
  std::map<std::string, Frames> levels;
  bool folders = false;
  const std::vector<InputFile> files = find_all_inputs({folder});
  for (const InputFile& file : files) folders = folders || file.relative.has_parent_path();
  for (const InputFile& file : files) {
    const std::string name = folders ? file.relative.parent_path().generic_string()
                                     : file.relative.stem().generic_string();
    Frames& frames = levels[name];
    frames.name = name;
    frames.files.push_back(file.path);
  }
  std::vector<Frames> list;
  for (auto& [name, frames] : levels) list.push_back(std::move(frames));
  return list;
}

// Calls take(frame) for every page of every file.
template <class Take>
void read_frames(const std::vector<fs::path>& files, const ReadLimits& limits,
                 JobObserver& observer, const Take& take) {
  for (const fs::path& file : files) {
    const int pages = count_pages(file);
    for (int page = 0; page < pages; ++page) {
      if (observer.stop_requested()) throw Error(ErrorKind::kInterrupt, "stopped on request");
      const Field field = read_page(file, page, limits);
      try {
        take(field.pixels.view());
      } catch (const Error& error) {
        throw Error(error.kind(), file.string() + ": " + error.what());
      }
    }
  }
}

// Exposures from the names if all have one, else numbers; true for exposures.
bool number_levels(std::vector<Frames>& levels) {
  const bool exposures = std::all_of(levels.begin(), levels.end(), [](const Frames& f) {
    return exposure_of(f.name).has_value();
  });
  double number = 0;
  for (Frames& frames : levels) {
    frames.level = exposures ? *exposure_of(frames.name) : ++number;
  }
  return exposures;
}

CameraFacts describe(const CameraModel& model, const std::vector<Frames>& levels) {
  CameraFacts facts;
  facts.version = program_version();
  facts.width = model.offset_map.width();
  facts.height = model.offset_map.height();
  facts.gain = model.gain;
  facts.gain_error = model.gain_error;
  facts.offset = model.offset;
  facts.offset_error = model.offset_error;
  facts.read_noise = model.read_noise;
  facts.read_noise_error = model.read_noise_error;
  facts.saturation = model.saturation.value_or(kUnknown);
  facts.linearity_residual = model.linearity_percent;
  facts.hot_pixels = model.hot_pixels;
  for (const CameraLevel& level : model.levels) {
    const bool dark = &level == &model.levels.front();
    if (dark) facts.dark_frames = level.frames;
    const auto named = std::find_if(levels.begin(), levels.end(),
                                    [&level](const Frames& f) { return f.level == level.level; });
    facts.levels.push_back({dark ? "dark" : named->name, level.frames, level.mean - model.offset,
                            level.variance, level.used});
  }
  return facts;
}

}  // namespace

CameraFacts measure_camera(const fs::path& dark, const fs::path& flat, const fs::path& output,
                           const ReadLimits& limits, JobObserver& observer) {
  require_folder(dark);
  require_folder(flat);
  std::vector<fs::path> dark_files;
  for (const InputFile& file : find_all_inputs({dark})) dark_files.push_back(file.path);
  std::vector<Frames> levels = flat_levels(flat);
  const bool exposures = number_levels(levels);

  CameraFit fit;
  read_frames(dark_files, limits, observer, [&](View<const float> frame) { fit.add_dark(frame); });
  for (const Frames& level : levels) {
    read_frames(level.files, limits, observer,
                [&](View<const float> frame) { fit.add_flat(level.level, frame); });
  }
  CameraModel model;
  try {
    model = fit.fit(exposures);
  } catch (const Error& error) {
    throw Error(error.kind(), flat.string() + ": " + error.what());
  }
  const CameraFacts facts = describe(model, levels);

  fs::path stem = output;
  stem.replace_extension();
  const auto beside = [&stem](const char* suffix) {
    fs::path file = stem;
    file += suffix;
    return file;
  };
  if (output.has_parent_path()) fs::create_directories(output.parent_path());
  write_tiff(beside(".offset.tif"), model.offset_map.view());
  write_tiff(beside(".hot-pixels.tif"), model.hot.view());
  write_text_atomically(beside(".transfer.csv"), camera_csv(facts));
  write_text_atomically(output, camera_text(facts));
  return facts;
}

}  // namespace stillfield
