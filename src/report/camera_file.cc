#include "report/camera_file.h"

#include <cmath>

#include "image/file_bytes.h"
#include "report/csv.h"
#include "report/json_archive.h"
#include "report/versions.h"

namespace stillfield {
namespace {

constexpr char kFormat[] = "stillfield camera 1";

}  // namespace

template <class Archive>
void describe(Archive& archive, CameraPoint& level) {
  archive("name", level.name);
  archive("frames", level.frames);
  archive("mean", level.mean);
  archive("variance", level.variance);
  archive("used", level.used);
}

template <class Archive>
void describe(Archive& archive, CameraFacts& camera) {
  archive.constant("format", kFormat);
  archive.constant("program", kProgramName);
  archive("version", camera.version);
  archive("width", camera.width);
  archive("height", camera.height);
  archive("dark_frames", camera.dark_frames);
  archive("gain", camera.gain);
  archive("gain_error", camera.gain_error);
  archive("offset", camera.offset);
  archive("offset_error", camera.offset_error);
  archive("read_noise", camera.read_noise);
  archive("read_noise_error", camera.read_noise_error);
  archive("saturation", camera.saturation);
  archive("linearity_residual_percent", camera.linearity_residual);
  archive("hot_pixels", camera.hot_pixels);
  archive("levels", camera.levels);
  archive("notes", camera.notes);
}

std::string camera_text(const CameraFacts& camera) {
  return json_text(to_json(camera));
}

std::string camera_csv(const CameraFacts& camera) {
  CsvTable table("level,frames,mean,variance,fitted_variance,used");
  for (const CameraPoint& level : camera.levels) {
    table.start_row();
    table.add(level.name);
    table.add(level.frames);
    table.add(level.mean);
    table.add(level.variance);
    table.add(camera.gain * level.mean + camera.read_noise * camera.read_noise);
    table.add(std::int64_t{level.used ? 1 : 0});
  }
  return table.text();
}

CameraFacts read_camera(const std::filesystem::path& file) {
  const std::vector<std::byte> bytes = read_whole(file);
  CameraFacts camera;
  try {
    const Json json =
        Json::parse(std::string(reinterpret_cast<const char*>(bytes.data()), bytes.size()));
    if (json.at("format") != kFormat) {
      throw_input(file, "is a file of another kind; give the one that `camera` wrote");
    }
    JsonReader reader(json);
    describe(reader, camera);
  } catch (const Json::exception&) {
    throw_input(file, "is no camera file; give the one that `camera` wrote");
  }
  const bool usable = camera.gain > 0 && std::isfinite(camera.gain) && camera.read_noise >= 0 &&
                      std::isfinite(camera.read_noise) && std::isfinite(camera.offset);
  if (!usable) {
    throw_input(file,
                "holds no usable noise model (gain, offset, read noise); measure the camera again");
  }
  return camera;
}

}  // namespace stillfield
