// camera.json: the noise model of a camera, as `camera` writes it and `denoise --camera` reads it.
//
// Model    variance of a pixel = gain (x - offset) + read_noise^2, below saturation (EMVA 1288
//          linear model: gain in grey values an electron)
// Units    grey values of the frames; errors are standard errors
#ifndef STILLFIELD_REPORT_CAMERA_FILE_H_
#define STILLFIELD_REPORT_CAMERA_FILE_H_

#include <cstdint>
#include <filesystem>
#include <string>
#include <vector>

#include "report/restoration_facts.h"

namespace stillfield {

struct CameraPoint {
  std::string name;  // of the folder or file of frames
  std::int64_t frames = 0;
  double mean = 0;      // above the offset
  double variance = 0;  // temporal
  bool used = false;    // for the line
};

struct CameraFacts {
  std::string version;
  int width = 0;
  int height = 0;
  std::int64_t dark_frames = 0;
  double gain = kUnknown;
  double gain_error = kUnknown;
  double offset = kUnknown;
  double offset_error = kUnknown;
  double read_noise = kUnknown;  // standard deviation
  double read_noise_error = kUnknown;
  double saturation = kUnknown;          // grey value from which on pixels are cut off
  double linearity_residual = kUnknown;  // largest, in percent of the fitted range
  std::int64_t hot_pixels = 0;
  std::vector<CameraPoint> levels;
  std::vector<std::string> notes;
};

std::string camera_text(const CameraFacts& camera);

// Level by level: name, frames, mean, variance, fitted variance, used. For a plot.
std::string camera_csv(const CameraFacts& camera);

// Throws Error(kInput) if the file is missing, is no such file, or its numbers make no noise model.
CameraFacts read_camera(const std::filesystem::path& file);

}  // namespace stillfield

#endif  // STILLFIELD_REPORT_CAMERA_FILE_H_
