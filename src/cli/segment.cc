#include "cli/segment.h"

#include <memory>
#include <string>

#include "cli/common_options.h"
#include "cli/light_options.h"
#include "core/error.h"

namespace stillfield {
namespace {

constexpr int kMinSweeps = 600;
constexpr int kMaxSweeps = 60000;  // visits of a pixel are counted in 16 bits
constexpr ConvergenceTarget kQuickTarget{1.05, 100, 0.02};

constexpr char kEpilogue[] =
    "Results, for each image NAME, in a mirror of the input folder:\n"
    "  NAME.labels.tif       most probable class of each pixel, 1..K by rising grey value\n"
    "  NAME.probability.tif  probability of each class, one page a class\n"
    "  NAME.entropy.tif      doubt at each pixel, in bits\n"
    "  NAME.shading.tif      the light, with --shading where it is modelled\n"
    "  NAME.labels.png       preview in colour\n"
    "  NAME.particles.csv    the particles of NAME.labels.tif, one by one\n"
    "  NAME.record.json      settings, diagnostics, measurements, digests\n"
    "and for the run: measurements.csv, summary.csv, particles.csv,\n"
    "checks.csv, run.json.\n"
    "\n"
    "Options can stand in a file: --config FILE (TOML, section [segment], keys as the options\n"
    "without dashes); the command line wins.\n"
    "\n"
    "Examples:\n"
    "  stillfield segment micrographs/ --classes 3 --out results\n"
    "  stillfield segment a.tif b.tif --classes 2 --out results --quick\n";

struct SegmentOptions : CommonOptions {
  std::string classes;
  std::string neighbours = "4";
  std::string coupling = "auto";
  std::string variance = "own";
  std::string blur = "none";
  std::string particle_neighbours = "8";
  std::string pixel_size;
  std::string mask;
  std::string shading = "none";
  LightOptions light;
  bool quick = false;
  bool no_bootstrap = false;
  SegmentSettings settings;
};

CouplingSettings coupling_settings(const std::string& text) {
  if (text == "auto") return {CouplingMode::kAuto, 0};
  if (text == "sampled") return {CouplingMode::kSampled, 0};
  return {CouplingMode::kFixed, parse_number(text).value()};
}

BlurSettings blur_settings(const std::string& text) {
  if (text == "auto") return {BlurMode::kAuto, 0};
  if (text == "none") return {BlurMode::kNone, 0};
  return {BlurMode::kGiven, parse_number(text).value()};
}

ShadingSettings shading_settings(const std::string& text) {
  if (text == "auto") return {ShadingMode::kAuto, 0};
  if (text == "none") return {ShadingMode::kNone, 0};
  return {ShadingMode::kGiven, static_cast<int>(parse_whole(text).value())};
}

int run_segment(SegmentOptions& options) {
  SegmentSettings& settings = options.settings;
  settings.classes = options.classes == "auto"
                         ? kAutoClasses
                         : static_cast<int>(parse_whole(options.classes).value());
  settings.connectivity = options.neighbours == "8" ? Connectivity::kEight : Connectivity::kFour;
  settings.coupling = coupling_settings(options.coupling);
  settings.blur = blur_settings(options.blur);
  settings.shading = shading_settings(options.shading);
  settings.light = light_files(options.light);
  if (settings.shading.mode != ShadingMode::kNone && settings.blur.mode != BlurMode::kNone) {
    throw Error(ErrorKind::kUsage,
                "--shading and --blur are not modelled together; leave one out, or take the light "
                "off with --flat-field");
  }
  settings.shared_variance = options.variance == "shared";
  settings.particles.connectivity = options.particle_neighbours == "4" ? 4 : 8;
  if (!options.pixel_size.empty()) settings.pixel_size_um = parse_length_um(options.pixel_size);
  settings.mask = options.mask;
  if (options.quick) settings.target = kQuickTarget;
  if (options.no_bootstrap) settings.replicates = 0;
  settings.replicates -= settings.replicates % 2;
  return run_command(options, settings.schedule.max_sweeps, "a larger\n--max-sweeps may help.",
                     [&](JobObserver& observer) {
                       return segment_folder({options.inputs.begin(), options.inputs.end()},
                                             settings, options.run, observer);
                     });
}

void add_model_options(CLI::App& app, SegmentOptions& options) {
  app.add_option("--classes", options.classes,
                 "Number of classes, or auto: 2 to 8, chosen for each image by held-out prediction")
      ->check(CLI::Validator(auto_or_whole(2, 64), "", ""))
      ->type_name("auto|2..64")
      ->required();
  add_choice(app, "--neighbours", options.neighbours, {"4", "8"}, "Neighbours of a pixel");
  app.add_option("--coupling", options.coupling,
                 "How strongly neighbours agree: fitted, drawn (path sampling), or given")
      ->check(CLI::Validator(check_coupling, "", ""))
      ->type_name("auto|sampled|VALUE")
      ->capture_default_str();
  add_choice(app, "--variance", options.variance, {"own", "shared"}, "Noise variance of classes");
  app.add_option("--blur", options.blur,
                 "The optics' blur, so that no class lines the border of two others: estimated, "
                 "left out, or its standard deviation")
      ->check(CLI::Validator(check_blur, "", ""))
      ->type_name("auto|none|PIXELS")
      ->capture_default_str();
  app.add_option("--shading", options.shading,
                 "Uneven light, as a smooth surface that is drawn with the labels: where it shows, "
                 "left out, or with so many coefficients along a side")
      ->check(CLI::Validator(check_shading, "", ""))
      ->type_name("auto|none|4..12")
      ->capture_default_str();
  add_light_options(app, options.light);
}

void add_sampling_options(CLI::App& app, SegmentOptions& options) {
  SegmentSettings& settings = options.settings;
  add_whole(app, "--chains", settings.chains, 2, 16, "Markov chains an image");
  add_whole(app, "--seed", settings.seed, 0, ~std::uint64_t{0}, "Seed of the random numbers");
  add_whole(app, "--max-sweeps", settings.schedule.max_sweeps, kMinSweeps, kMaxSweeps,
            "Limit of sweeps a chain");
  app.add_flag("--quick", options.quick,
               "Looser targets: R-hat 1.05 (not 1.01), ESS 100 (400), error of the mean label "
               "probability 0.02 (0.01)");
}

void add_bootstrap_options(CLI::App& app, SegmentOptions& options) {
  add_whole(app, "--replicates", options.settings.replicates, 6, 64,
            "Simulated images that correct the measurements; an odd number counts as one less");
  app.add_flag("--no-bootstrap", options.no_bootstrap,
               "Leave the measurements as the posterior has them");
}

void add_measuring_options(CLI::App& app, SegmentOptions& options) {
  ParticleSettings& particles = options.settings.particles;
  app.add_option("--pixel-size", options.pixel_size,
                 "Side of a pixel, say 0.32um (nm, um or mm); overrides that of the files")
      ->check(CLI::Validator(check_length, "", ""))
      ->type_name("LENGTH");
  add_whole(app, "--min-area", particles.min_area, 1, std::uint64_t{1} << 40,
            "Pixels; smaller regions are no particles");
  add_choice(app, "--particle-neighbours", options.particle_neighbours, {"4", "8"},
             "Neighbours that make one particle");
  app.add_option("--mask", options.mask,
                 "Region of interest: not 0. Pixels of 0 are neither seen nor measured. One file "
                 "for all images, or a folder of files named as the images")
      ->type_name("FILE|DIR");
}

}  // namespace

Command add_segment(CLI::App& app) {
  auto options = std::make_shared<SegmentOptions>();
  CLI::App* segment =
      app.add_subcommand("segment", "Labels with class probabilities, entropy and measurements");
  segment->fallthrough();  // --config belongs to the program
  segment->footer(kEpilogue);
  add_inputs_and_output(*segment, *options);
  add_model_options(*segment, *options);
  add_measuring_options(*segment, *options);
  add_bootstrap_options(*segment, *options);
  add_sampling_options(*segment, *options);
  add_run_options(*segment, *options);
  return {segment, [options] { return run_segment(*options); }};
}

}  // namespace stillfield
