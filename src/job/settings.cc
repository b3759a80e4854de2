#include "job/settings.h"

namespace stillfield {
namespace {

std::string coupling_name(CouplingMode mode) {
  switch (mode) {
    case CouplingMode::kAuto:
      return "auto";
    case CouplingMode::kSampled:
      return "sampled";
    case CouplingMode::kFixed:
      return "fixed";
  }
  return {};
}

std::string blur_name(BlurMode mode) {
  switch (mode) {
    case BlurMode::kAuto:
      return "auto";
    case BlurMode::kNone:
      return "none";
    case BlurMode::kGiven:
      return "given";
  }
  return {};
}

std::uint64_t whole(int value) {
  return static_cast<std::uint64_t>(value);
}

}  // namespace

std::vector<NamedValue> named_settings(const SegmentSettings& settings) {
  std::vector<NamedValue> list = {settings.classes == kAutoClasses
                                      ? NamedValue{"classes", std::string("auto")}
                                      : NamedValue{"classes", whole(settings.classes)},
                                  {"neighbours", whole(static_cast<int>(settings.connectivity))},
                                  {"coupling", coupling_name(settings.coupling.mode)}};
  if (settings.coupling.mode == CouplingMode::kFixed) {
    list.push_back({"coupling_value", settings.coupling.value});
  }
  list.push_back({"blur", blur_name(settings.blur.mode)});
  if (settings.blur.mode == BlurMode::kGiven) list.push_back({"blur_value", settings.blur.value});
  if (settings.shading.mode != ShadingMode::kNone) {
    list.push_back(settings.shading.mode == ShadingMode::kAuto
                       ? NamedValue{"shading", std::string("auto")}
                       : NamedValue{"shading", whole(settings.shading.coefficients)});
  }
  const std::vector<NamedValue> rest = {
      {"variance", std::string(settings.shared_variance ? "shared" : "own")},
      {"chains", whole(settings.chains)},
      {"seed", settings.seed},
      {"sweeps_a_block", whole(settings.schedule.sweeps_a_block)},
      {"first_part", whole(settings.schedule.first_part)},
      {"first_window", whole(settings.schedule.first_window)},
      {"max_sweeps", whole(settings.schedule.max_sweeps)},
      {"max_rhat", settings.target.max_rhat},
      {"min_ess", settings.target.min_ess},
      {"max_probability_mcse", settings.target.max_probability_mcse},
      {"bootstrap_replicates", whole(settings.replicates)}};
  list.insert(list.end(), rest.begin(), rest.end());
  list.push_back({"particle_neighbours", whole(settings.particles.connectivity)});
  list.push_back({"min_area", static_cast<std::uint64_t>(settings.particles.min_area)});
  if (settings.pixel_size_um) list.push_back({"pixel_size_um", *settings.pixel_size_um});
  if (!settings.mask.empty()) {
    list.push_back({"mask", settings.mask.generic_string()});
    if (!settings.mask_sha256.empty()) list.push_back({"mask_sha256", settings.mask_sha256});
  }
  name_light_files(settings.light, list);
  return list;
}

}  // namespace stillfield
