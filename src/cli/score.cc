#include "cli/score.h"

#include <CLI/CLI.hpp>
#include <cstdio>
#include <memory>
#include <optional>
#include <string>

#include "cli/number_option.h"
#include "core/error.h"
#include "job/score_folder.h"

namespace stillfield {
namespace {

constexpr char kEpilogue[] =
    "Truth: images under the names of the inputs, in any of the formats read. For results of\n"
    "segment they hold the classes 1..K by rising grey value, 0 where nothing is known; for those\n"
    "of denoise the true intensities.\n"
    "Writes DIR/score.csv and DIR/score.json, and prints the means over the images.\n"
    "\n"
    "Example:\n"
    "  stillfield score results --truth truth\n";

struct ScoreOptions {
  std::string results;
  std::string truth;
  std::string peak;
};

int run_score(const ScoreOptions& options) {
  const std::optional<double> peak = parse_number(options.peak);
  const FolderScore score = score_folder(options.results, options.truth, peak);
  for (const std::string& sentence : score.failures) {
    std::fprintf(stderr, "stillfield: %s\n", sentence.c_str());
  }
  std::printf("%zu scored, %zu failed. Means over the images:\n", score.images.size(),
              score.failures.size());
  for (const ScoreValue& mean : mean_scores(score.images)) {
    const std::string name =
        mean.score + (mean.label > 0 ? " of class " + std::to_string(mean.label) : std::string());
    std::printf("  %-36s %.5g\n", name.c_str(), mean.value);
  }
  std::printf("Details are in %s: score.csv, score.json.\n", options.results.c_str());
  return score.failures.empty() ? kExitAllDone : kExitSomeFailed;
}

std::string check_peak(const std::string& text) {
  const auto value = parse_number(text);
  return value && *value > 0 ? "" : "must be a number above 0, not '" + text + "'";
}

}  // namespace

Command add_score(CLI::App& app) {
  auto options = std::make_shared<ScoreOptions>();
  CLI::App* score = app.add_subcommand("score", "Results against a known truth");
  score->footer(kEpilogue);
  score->add_option("DIR", options->results, "Folder that segment or denoise wrote")
      ->required()
      ->type_name("");
  score->add_option("--truth", options->truth, "Folder of true labels or intensities")
      ->required()
      ->type_name("DIR");
  score
      ->add_option("--peak", options->peak,
                   "Range for PSNR and SSIM (default: that of the truth's sample type)")
      ->check(CLI::Validator(check_peak, "", ""))
      ->type_name("VALUE");
  return {score, [options] { return run_score(*options); }};
}

}  // namespace stillfield
