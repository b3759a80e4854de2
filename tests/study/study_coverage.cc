// Coverage, bias and overlap of `segment` on synthetic two-class fields with known labels.
//
// usage: study_coverage disks|potts IMAGES [SIGMA ...] [--coupling auto|sampled] [--neighbours 4|8]
// Prints one Markdown table row a noise level. Results: docs/accuracy.md.
#include <algorithm>
#include <cmath>
#include <cstdio>
#include <cstdlib>
#include <string>
#include <vector>

#include "job/restore_one.h"
#include "study/synthetic.h"

using namespace stillfield;

namespace {

struct Options {
  bool disks = true;
  int images = 20;
  std::vector<double> sigmas;
  CouplingMode mode = CouplingMode::kAuto;
  Connectivity connectivity = Connectivity::kFour;
  int side = 128;
  int block = 4;
};

Options parse(int argc, char** argv) {
  Options o;
  const std::vector<std::string> args(argv + 1, argv + argc);
  for (std::size_t i = 0; i < args.size(); ++i) {
    if (args[i] == "disks" || args[i] == "potts") {
      o.disks = args[i] == "disks";
    } else if (args[i] == "--coupling") {
      o.mode = args[++i] == "sampled" ? CouplingMode::kSampled : CouplingMode::kAuto;
    } else if (args[i] == "--neighbours") {
      o.connectivity = args[++i] == "8" ? Connectivity::kEight : Connectivity::kFour;
    } else if (args[i] == "--side") {
      o.side = std::atoi(args[++i].c_str());
    } else if (args[i] == "--block") {
      o.block = std::atoi(args[++i].c_str());
    } else if (i == 1) {
      o.images = std::atoi(args[i].c_str());
    } else {
      o.sigmas.push_back(std::atof(args[i].c_str()));
    }
  }
  if (o.sigmas.empty()) o.sigmas = {0.3, 0.6, 1.0};
  return o;
}

const TraceSummary& fraction_of_class_2(const LabelSampling& run) { return run.scalars[1].summary; }

}  // namespace

int main(int argc, char** argv) {
  const Options o = parse(argc, argv);
  const Pool pool(2);
  JobObserver observer;
  std::printf("| sigma | images | covered 90 %% | bias of fraction | mean width | Dice | converged | mean sweeps | alpha | beta |\n"
              "|---|---|---|---|---|---|---|---|---|---|\n");
  int all_covered = 0, all = 0;
  for (const double sigma : o.sigmas) {
    double bias = 0, width = 0, overlap = 0, alpha = 0, beta = 0, sweeps = 0;
    int covered = 0, converged = 0;
    for (int i = 0; i < o.images; ++i) {
      const auto seed = static_cast<std::uint64_t>(1000 + i);
      const auto truth = o.disks ? study::draw_disks(o.side, seed)
                                 : study::draw_potts(o.side, 2, 0.85, 4000, seed);
      const auto grey = make_grey_levels(study::add_noise(truth, sigma, seed).view());
      SegmentSettings settings;
      settings.connectivity = o.connectivity;
      settings.coupling.mode = o.mode;
      settings.schedule.sweeps_a_block = o.block;
      const auto run = restore_one(grey, settings, seed, pool, observer);
      const TraceSummary& f = fraction_of_class_2(run);
      covered += f.lower90 <= truth.fraction && truth.fraction <= f.upper90;
      converged += run.verdict.converged;
      bias += f.mean - truth.fraction;
      width += f.upper90 - f.lower90;
      overlap += study::dice(truth, run.counts->most_probable());
      alpha += run.prior.alpha[1];
      beta += run.prior.beta;
      if (std::getenv("VERBOSE")) { std::printf("  %d beta %.3f alpha %.3f bias %+.4f dice %.4f:", i, run.prior.beta, run.prior.alpha[1], f.mean - truth.fraction, study::dice(truth, run.counts->most_probable())); for (const auto& l : run.coupling_ladder) std::printf(" %.2f/%.1f", l.beta, l.score); std::printf("\n"); }
      sweeps += run.adapting_sweeps + run.warming_sweeps + run.sampling_sweeps;
    }
    const double n = o.images;
    std::printf("| %.1f | %d | %.3f | %+.6f | %.5f | %.4f | %d | %.0f | %.3f | %.3f |\n", sigma, o.images,
                covered / n, bias / n, width / n, overlap / n, converged, sweeps / n, alpha / n, beta / n);
    std::fflush(stdout);
    all_covered += covered;
    all += o.images;
  }
  std::printf("\npooled coverage of the 90 %% intervals: %.3f\n", static_cast<double>(all_covered) / all);
}
