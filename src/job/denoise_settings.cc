#include "job/denoise_settings.h"

namespace stillfield {
namespace {

std::uint64_t whole(int value) {
  return static_cast<std::uint64_t>(value);
}

void name_noise(const NoiseRequest& noise, std::vector<NamedValue>& list) {
  list.push_back({"noise", noise.kind ? name_of(*noise.kind) : std::string("auto")});
  if (noise.sd) list.push_back({"noise_sd", *noise.sd});
  if (noise.photon) {
    list.push_back({"noise_gain", noise.photon->gain});
    list.push_back({"noise_variance", noise.photon->variance});
    list.push_back({"noise_offset", noise.photon->offset});
  }
  if (!noise.camera.empty()) list.push_back({"camera", noise.camera});
}

}  // namespace

std::string name_of(PriorChoice prior) {
  switch (prior) {
    case PriorChoice::kPatches:
      return "patches";
    case PriorChoice::kEdges:
      return "edges";
    case PriorChoice::kSmooth:
      return "smooth";
  }
  return {};
}

std::string name_of(NoiseKind kind) {
  switch (kind) {
    case NoiseKind::kGaussian:
      return "gaussian";
    case NoiseKind::kPhoton:
      return "photon";
    case NoiseKind::kRician:
      return "rician";
  }
  return {};
}

std::vector<NamedValue> named_settings(const DenoiseSettings& settings) {
  std::vector<NamedValue> list = {{"prior", name_of(settings.prior)}};
  name_noise(settings.noise, list);
  switch (settings.impulses) {
    case ImpulseMode::kAuto:
      list.push_back({"impulses", std::string("auto")});
      break;
    case ImpulseMode::kOff:
      list.push_back({"impulses", std::string("off")});
      break;
    case ImpulseMode::kShare:
      list.push_back({"impulses", settings.impulse_share});
      break;
  }
  if (settings.saturation) list.push_back({"saturation", *settings.saturation});
  if (!settings.mask.empty()) {
    list.push_back({"mask", settings.mask.generic_string()});
    if (!settings.mask_sha256.empty()) list.push_back({"mask_sha256", settings.mask_sha256});
  }
  name_light_files(settings.light, list);
  if (!settings.learn_from.empty()) {
    list.push_back({"learn_from", settings.learn_from.generic_string()});
    list.push_back({"learn_from_sha256", settings.learn_from_sha256});
  }
  const bool patches = settings.prior == PriorChoice::kPatches;
  if (patches) {
    list.push_back({"patch", whole(settings.patch)});
    list.push_back({"correlated_noise", settings.correlated_noise});
  } else {
    list.push_back({"neighbours", whole(static_cast<int>(settings.connectivity))});
    list.push_back({"chains", whole(settings.chains)});
    list.push_back({"max_sweeps", whole(settings.max_sweeps)});
  }
  list.push_back({"recheck", settings.recheck});
  list.push_back({"samples", whole(settings.samples)});
  list.push_back({"quick", settings.quick});
  list.push_back({"float_output", settings.float_output});
  list.push_back({"seed", settings.seed});
  return list;
}

}  // namespace stillfield
