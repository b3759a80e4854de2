// What a run of `denoise` is asked to do.
#ifndef STILLFIELD_JOB_DENOISE_SETTINGS_H_
#define STILLFIELD_JOB_DENOISE_SETTINGS_H_

#include <cstdint>
#include <filesystem>
#include <optional>
#include <string>
#include <vector>

#include "job/light_files.h"
#include "model/neighbourhood.h"
#include "model/noise_model.h"
#include "report/named_value.h"

namespace stillfield {

enum class PriorChoice { kPatches, kEdges, kSmooth };

// Noise as asked for. Without numbers it is estimated from each image (and channel).
struct NoiseRequest {
  std::optional<NoiseKind> kind;  // none: the data decide between gaussian and photon
  std::optional<double> sd;       // gaussian, rician
  struct Photon {
    double gain = 0, variance = 0, offset = 0;
  };
  std::optional<Photon> photon;
  std::string camera;  // file the photon numbers come from, for the record; empty: none
};

enum class ImpulseMode { kAuto, kOff, kShare };

// All of them change results and stand in the record.
struct DenoiseSettings {
  PriorChoice prior = PriorChoice::kPatches;
  NoiseRequest noise;
  ImpulseMode impulses = ImpulseMode::kAuto;
  double impulse_share = 0;          // kShare: the share to start from
  std::optional<double> saturation;  // grey values from here on are saturated
  std::filesystem::path mask;        // file, or folder of files named as the images; 0 = not used
  std::string mask_sha256;           // of the mask of the image at hand (job/mask.h)
  LightFiles light;
  std::filesystem::path learn_from;  // file or folder of like images for the patch mixture
  std::string learn_from_sha256;     // of all that `learn_from` holds
  bool correlated_noise = false;     // model a short-range covariance of the noise
  bool recheck = false;              // scale the intervals by restoring re-noised results
  Connectivity connectivity = Connectivity::kFour;  // edges, smooth
  int patch = 0;                                    // side; 0: chosen by the noise
  int chains = 4;                                   // edges, smooth
  int max_sweeps = 4000;                            // edges, smooth
  int samples = 0;                                  // posterior draws to write
  bool quick = false;
  bool float_output = false;  // restored image as floats whatever the input
  std::uint64_t seed = 1;
};

std::string name_of(PriorChoice prior);
std::string name_of(NoiseKind kind);

// All of them under the names of the record.
std::vector<NamedValue> named_settings(const DenoiseSettings& settings);

}  // namespace stillfield

#endif  // STILLFIELD_JOB_DENOISE_SETTINGS_H_
