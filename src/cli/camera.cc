#include "cli/camera.h"

#include <CLI/CLI.hpp>
#include <cmath>
#include <cstdio>
#include <memory>
#include <string>

#include "cli/progress.h"
#include "cli/signals.h"
#include "core/error.h"
#include "job/camera_job.h"

namespace stillfield {
namespace {

constexpr char kEpilogue[] =
    "Dark frames: any number (at least 2) taken without light. Flat frames: evenly lit, at "
    "several\n"
    "levels, at least 2 a level; each sub-folder of --flat is a level, or each file with several\n"
    "pages. Sub-folders named by their exposure (1, 2, 4.5ms, ...) let the linearity be judged.\n"
    "Writes FILE, and beside it .transfer.csv (levels, for a plot), .offset.tif (mean dark value "
    "of\n"
    "each pixel) and .hot-pixels.tif. Then: stillfield denoise IMAGES --camera FILE --out DIR\n"
    "\n"
    "Example:\n"
    "  stillfield camera --dark dark/ --flat flat/ --out camera.json\n";

struct CameraOptions {
  std::string dark;
  std::string flat;
  std::string output;
  bool quiet = false;
};

void print_value(const char* name, double value, double error) {
  if (!std::isfinite(value)) {
    std::printf("  %-12s not seen\n", name);
  } else if (std::isfinite(error)) {
    std::printf("  %-12s %.5g +- %.2g\n", name, value, error);
  } else {
    std::printf("  %-12s %.5g\n", name, value);
  }
}

int run_camera(const CameraOptions& options) {
  catch_stop_signals();
  CameraFacts camera;
  {
    Progress progress(options.quiet, 1);
    camera = measure_camera(options.dark, options.flat, options.output, {}, progress);
  }
  if (options.quiet) return kExitAllDone;
  std::printf("%d x %d pixels, in grey values:\n", camera.width, camera.height);
  print_value("gain", camera.gain, camera.gain_error);
  print_value("offset", camera.offset, camera.offset_error);
  print_value("read noise", camera.read_noise, camera.read_noise_error);
  print_value("saturation", camera.saturation, kUnknown);
  std::printf("  %-12s %lld\n", "hot pixels", static_cast<long long>(camera.hot_pixels));
  std::printf("Written to %s.\n", options.output.c_str());
  return kExitAllDone;
}

}  // namespace

Command add_camera(CLI::App& app) {
  auto options = std::make_shared<CameraOptions>();
  CLI::App* camera =
      app.add_subcommand("camera", "Noise model of a camera from dark and flat frames");
  camera->footer(kEpilogue);
  camera->add_option("--dark", options->dark, "Folder of dark frames")
      ->required()
      ->type_name("DIR");
  camera->add_option("--flat", options->flat, "Folder of flat frames")
      ->required()
      ->type_name("DIR");
  camera->add_option("--out", options->output, "File for the model")->required()->type_name("FILE");
  camera->add_flag("--quiet", options->quiet, "Write nothing but errors to the terminal");
  return {camera, [options] { return run_camera(*options); }};
}

}  // namespace stillfield
