#include "cli/segment.h"

#include <CLI/CLI.hpp>
#include <algorithm>
#include <cstdio>
#include <memory>
#include <string>
#include <thread>
#include <vector>

#include "cli/number_option.h"
#include "cli/progress.h"
#include "cli/signals.h"
#include "core/error.h"
#include "job/folder.h"
#include "simd/target.h"

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
    "  NAME.labels.png       preview in colour\n"
    "  NAME.record.json      settings, diagnostics, measurements, digests\n"
    "and for the run: measurements.csv, summary.csv, run.json.\n"
    "\n"
    "Options can stand in a file: --config FILE (TOML, section [segment], keys as the options\n"
    "without dashes); the command line wins.\n"
    "\n"
    "Examples:\n"
    "  stillfield segment micrographs/ --classes 3 --out results\n"
    "  stillfield segment a.tif b.tif --classes 2 --out results --quick\n";

struct SegmentOptions {
  std::vector<std::string> inputs;
  std::string output;
  std::string neighbours = "4";
  std::string coupling = "auto";
  std::string variance = "own";
  std::string cpu_target = "auto";
  bool quick = false;
  bool strict = false;
  bool quiet = false;
  SegmentSettings settings;
  RunSettings run;
};

CouplingSettings coupling_settings(const std::string& text) {
  if (text == "auto") return {CouplingMode::kAuto, 0};
  if (text == "sampled") return {CouplingMode::kSampled, 0};
  return {CouplingMode::kFixed, parse_number(text).value()};
}

void print_summary(const FolderCounts& counts, const std::string& output) {
  const int all = counts.done + counts.skipped + counts.failed + counts.not_reached;
  std::printf("%d %s: %d done", all, all == 1 ? "image" : "images", counts.done);
  if (counts.skipped > 0) std::printf(", %d finished before", counts.skipped);
  if (counts.failed > 0) std::printf(", %d failed", counts.failed);
  if (counts.not_reached > 0) std::printf(", %d not reached", counts.not_reached);
  std::printf(".\n");
  if (counts.not_converged > 0) {
    std::printf(
        "%d did not converge: the \"verdict\" in NAME.record.json says what is missing; a larger\n"
        "--max-sweeps may help.\n",
        counts.not_converged);
  }
  std::printf("Results are in %s: measurements.csv, summary.csv, run.json and the maps.\n",
              output.c_str());
  if (counts.interrupted) {
    std::printf("Stopped on request; the same command again continues where this one ended.\n");
  }
}

int run_segment(SegmentOptions& options) {
  SegmentSettings& settings = options.settings;
  settings.connectivity = options.neighbours == "8" ? Connectivity::kEight : Connectivity::kFour;
  settings.coupling = coupling_settings(options.coupling);
  settings.shared_variance = options.variance == "shared";
  if (options.quick) settings.target = kQuickTarget;
  options.run.output = options.output;
  force_cpu_target(options.cpu_target);
  catch_stop_signals();

  FolderCounts counts;
  {
    Progress progress(options.quiet, settings.schedule.max_sweeps);
    counts = segment_folder({options.inputs.begin(), options.inputs.end()}, settings, options.run,
                            progress);
  }
  if (!options.quiet) print_summary(counts, options.output);
  if (counts.interrupted) return kExitInterrupted;
  if (counts.failed > 0) return kExitSomeFailed;
  return options.strict && counts.not_converged > 0 ? kExitNotConverged : kExitAllDone;
}

// An option that takes a whole number; range and default are shown in the help.
template <class T>
CLI::Option* add_whole(CLI::App& app, const char* name, T& value, std::uint64_t lowest,
                       std::uint64_t highest, const char* help) {
  return app.add_option(name, value, help)
      ->check(CLI::Validator(whole_number(lowest, highest), "", ""))
      ->type_name(highest < 1000000 ? std::to_string(lowest) + ".." + std::to_string(highest) : "N")
      ->capture_default_str();
}

CLI::Option* add_choice(CLI::App& app, const char* name, std::string& value,
                        const std::vector<std::string>& choices, const char* help) {
  std::string list;
  for (const std::string& choice : choices) list += (list.empty() ? "" : "|") + choice;
  const auto check = [choices, list](const std::string& text) -> std::string {
    const bool known = std::find(choices.begin(), choices.end(), text) != choices.end();
    return known ? "" : "must be one of " + list + ", not '" + text + "'";
  };
  return app.add_option(name, value, help)
      ->check(CLI::Validator(check, "", ""))
      ->type_name(list)
      ->capture_default_str();
}

void add_model_options(CLI::App& app, SegmentOptions& options) {
  SegmentSettings& settings = options.settings;
  add_whole(app, "--classes", settings.classes, 2, 64, "Number of classes")
      ->required()
      ->default_str("");
  add_choice(app, "--neighbours", options.neighbours, {"4", "8"}, "Neighbours of a pixel");
  app.add_option("--coupling", options.coupling,
                 "How strongly neighbours agree: fitted, drawn (path sampling), or given")
      ->check(CLI::Validator(check_coupling, "", ""))
      ->type_name("auto|sampled|VALUE")
      ->capture_default_str();
  add_choice(app, "--variance", options.variance, {"own", "shared"}, "Noise variance of classes");
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

void add_run_options(CLI::App& app, SegmentOptions& options) {
  options.run.threads = static_cast<int>(std::max(1u, std::thread::hardware_concurrency()));
  add_whole(app, "--threads", options.run.threads, 1, 1024, "Threads; results do not depend on it")
      ->default_str("all cores");
  app.add_option("--cpu-target", options.cpu_target,
                 "Instruction set, auto or one that `stillfield info` lists; results do not depend "
                 "on it")
      ->type_name("NAME")
      ->capture_default_str();
  add_whole(app, "--max-pixels", options.run.limits.max_pixels, 1, std::uint64_t{1} << 34,
            "Refuse pages with more pixels");
  app.add_flag("--redo", options.run.redo, "Do again what is finished");
  app.add_flag("--strict", options.strict, "Exit code 3 if a result did not converge");
  app.add_flag("--quiet", options.quiet, "Write nothing but errors to the terminal");
}

}  // namespace

Command add_segment(CLI::App& app) {
  auto options = std::make_shared<SegmentOptions>();
  CLI::App* segment =
      app.add_subcommand("segment", "Labels with class probabilities, entropy and measurements");
  segment->fallthrough();  // --config belongs to the program
  segment->footer(kEpilogue);
  segment->add_option("INPUT", options->inputs, "Image files and folders of images")
      ->required()
      ->type_name("");
  segment->add_option("--out", options->output, "Folder for the results, made if need be")
      ->required()
      ->type_name("DIR");
  add_model_options(*segment, *options);
  add_sampling_options(*segment, *options);
  add_run_options(*segment, *options);
  return {segment, [options] { return run_segment(*options); }};
}

}  // namespace stillfield
