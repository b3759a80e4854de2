#include "cli/denoise.h"

#include <cmath>
#include <memory>
#include <string>

#include "cli/common_options.h"
#include "cli/light_options.h"
#include "cli/noise_option.h"
#include "core/error.h"
#include "image/digest.h"
#include "report/camera_file.h"

namespace stillfield {
namespace {

constexpr char kEpilogue[] =
    "Results, for each image NAME, in a mirror of the input folder:\n"
    "  NAME.restored.tif     posterior mean, in the input's sample type\n"
    "  NAME.sd.tif           posterior standard deviation of each pixel\n"
    "  NAME.lower90.tif      and\n"
    "  NAME.upper90.tif      the 90 % interval of each pixel\n"
    "  NAME.impulses.tif     probability that a pixel is an impulse, if there are any\n"
    "  NAME.draws.tif        with --samples: draws from the posterior, a page each\n"
    "  NAME.restored.png     preview\n"
    "  NAME.record.json      settings, noise, diagnostics, digests\n"
    "and for the run: measurements.csv, summary.csv, run.json.\n"
    "\n"
    "Options can stand in a file: --config FILE (TOML, section [denoise], keys as the options\n"
    "without dashes); the command line wins.\n"
    "\n"
    "Examples:\n"
    "  stillfield denoise fields/ --out restored\n"
    "  stillfield denoise fields/ --camera camera.json --out restored\n"
    "  stillfield denoise a.tif --noise gaussian:12.5 --out restored --quick\n";

struct DenoiseOptions : CommonOptions {
  std::string prior = "patches";
  std::string noise = "auto";
  std::string impulses = "auto";
  std::string camera;
  std::string mask;
  std::string learn_from;
  LightOptions light;
  std::string neighbours = "4";
  std::string correlation = "none";
  std::string saturation;
  std::string depth = "input";
  DenoiseSettings settings;
};

PriorChoice prior_choice(const std::string& text) {
  for (const PriorChoice prior : {PriorChoice::kEdges, PriorChoice::kSmooth}) {
    if (text == name_of(prior)) return prior;
  }
  return PriorChoice::kPatches;
}

// Noise and saturation of a camera, under its file's name.
void take_camera(const std::string& file, DenoiseSettings& settings) {
  const CameraFacts camera = read_camera(file);
  settings.noise.kind = NoiseKind::kPhoton;
  settings.noise.photon = {camera.gain, camera.read_noise * camera.read_noise, camera.offset};
  settings.noise.camera = file;
  if (std::isfinite(camera.saturation)) settings.saturation = camera.saturation;
}

void complete_settings(DenoiseOptions& options) {
  DenoiseSettings& settings = options.settings;
  settings.prior = prior_choice(options.prior);
  settings.noise = parse_noise(options.noise).value();
  if (!options.camera.empty()) {
    if (options.noise != "auto") {
      throw Error(ErrorKind::kUsage,
                  "--camera and --noise both say what the noise is; give one of them");
    }
    take_camera(options.camera, settings);
  }
  settings.impulses = options.impulses == "auto"  ? ImpulseMode::kAuto
                      : options.impulses == "off" ? ImpulseMode::kOff
                                                  : ImpulseMode::kShare;
  if (settings.impulses == ImpulseMode::kShare) {
    settings.impulse_share = parse_number(options.impulses).value();
  }
  if (!options.saturation.empty()) settings.saturation = parse_number(options.saturation);
  settings.mask = options.mask;
  settings.light = light_files(options.light);
  if (settings.saturation && settings.light.any()) {
    throw Error(ErrorKind::kUsage,
                "--saturation (or that of --camera) and --flat-field or --background do not go "
                "together: corrected grey values are cut off at no one value; leave one out");
  }
  settings.learn_from = options.learn_from;
  settings.learn_from_sha256 = sha256_of_tree(settings.learn_from);
  settings.correlated_noise = options.correlation == "estimate";
  settings.connectivity = options.neighbours == "8" ? Connectivity::kEight : Connectivity::kFour;
  settings.float_output = options.depth == "float";
}

int run_denoise(DenoiseOptions& options) {
  complete_settings(options);
  return run_command(options, options.settings.max_sweeps,
                     "a larger\n--max-sweeps may help with the priors edges and smooth.",
                     [&](JobObserver& observer) {
                       return denoise_folder({options.inputs.begin(), options.inputs.end()},
                                             options.settings, options.run, observer);
                     });
}

std::string check_finite(const std::string& text) {
  const auto value = parse_number(text);
  return value && std::isfinite(*value) ? "" : "must be a number, not '" + text + "'";
}

CLI::Option* add_text(CLI::App& app, const char* name, std::string& value, const char* type,
                      const char* help) {
  return app.add_option(name, value, help)->type_name(type);
}

void add_noise_options(CLI::App& app, DenoiseOptions& options) {
  add_text(app, "--noise", options.noise, "KIND[:NUMBERS]",
           "auto, gaussian[:SD], photon[:GAIN,VARIANCE[,OFFSET]] (variance of a pixel = GAIN "
           "(x - OFFSET) + VARIANCE) or rician[:SD]; estimated without numbers")
      ->check(CLI::Validator(check_noise, "", ""))
      ->capture_default_str();
  add_text(app, "--camera", options.camera, "FILE",
           "Noise and saturation of a camera, from `stillfield camera`");
  add_text(app, "--impulses", options.impulses, "auto|off|SHARE",
           "Pixels that show nothing of the scene: found by themselves, none, or a share to expect")
      ->check(CLI::Validator(check_impulses, "", ""))
      ->capture_default_str();
  add_text(app, "--saturation", options.saturation, "VALUE", "Grey values from here on are cut off")
      ->check(CLI::Validator(check_finite, "", ""));
  add_text(app, "--mask", options.mask, "FILE|DIR",
           "Pixels to use (not 0) and to restore from their neighbours (0): one file for all "
           "images, or a folder of files named as the images");
  add_light_options(app, options.light);
  add_choice(app, "--noise-correlation", options.correlation, {"none", "estimate"},
             "Noise of neighbouring pixels: independent, or a short-range covariance estimated");
}

void add_field_options(CLI::App& app, DenoiseOptions& options) {
  DenoiseSettings& settings = options.settings;
  add_choice(app, "--prior", options.prior, {"patches", "edges", "smooth"},
             "Field over clean images: patches learned from the image, Laplace or Gaussian "
             "differences of neighbours");
  add_whole(app, "--patch", settings.patch, 0, 8,
            "Side of a patch, 4, 6 or 8; 0: 6 and 8, blended");
  add_text(app, "--learn-from", options.learn_from, "FILE|DIR",
           "Like images to learn the patches from, instead of each image itself");
  add_choice(app, "--neighbours", options.neighbours, {"4", "8"},
             "Neighbours of a pixel (edges, smooth)");
  add_whole(app, "--chains", settings.chains, 2, 16, "Markov chains an image (edges, smooth)");
  add_whole(app, "--max-sweeps", settings.max_sweeps, 600, 60000,
            "Limit of sweeps a chain (edges, smooth)");
  add_whole(app, "--samples", settings.samples, 0, 1000, "Posterior draws to write");
  app.add_flag("--recheck", settings.recheck,
               "Scale the intervals by what restoring re-noised results shows (three times the "
               "work)");
  app.add_flag("--quick", settings.quick, "Less work, slightly less sharp");
  add_choice(app, "--depth", options.depth, {"input", "float"}, "Sample type of NAME.restored.tif");
  add_whole(app, "--seed", settings.seed, 0, ~std::uint64_t{0}, "Seed of the random numbers");
}

}  // namespace

Command add_denoise(CLI::App& app) {
  auto options = std::make_shared<DenoiseOptions>();
  CLI::App* denoise =
      app.add_subcommand("denoise", "Restored intensities with an interval for each pixel");
  denoise->fallthrough();  // --config belongs to the program
  denoise->footer(kEpilogue);
  add_inputs_and_output(*denoise, *options);
  add_noise_options(*denoise, *options);
  add_field_options(*denoise, *options);
  add_run_options(*denoise, *options);
  return {denoise, [options] { return run_denoise(*options); }};
}

}  // namespace stillfield
