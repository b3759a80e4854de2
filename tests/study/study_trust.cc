// Do the 90 % intervals cover on shapes that are not drawn from the model?
//
// usage: study_trust IMAGES [--cell FAMILY SIGMA BLUR] [--first N] [--threads N] [--quick]
//                    [--replicates N] [--parts FILE]
// 24 cells: disks, blobs, lines, polygons (study/shapes.h); noise of .4, .7 and 1.0 of the
// contrast; with and without a blur of 1 px. Sides cycle over 96, 128, 192, 256. The truth is what
// measure_labels gives of the true labels with the same settings. Prints Markdown: for each
// cell and measurement coverage, bias and mean width before and after the bootstrap. An image whose
// truth is NaN (no particle inside the frame) does not count. Results: docs/trust.md.
// --parts appends what the bootstrap found, a line of CSV a measurement and image, for
// study/bootstrap_shares.py.
#include <array>
#include <cmath>
#include <cstdio>
#include <cstdlib>
#include <string>
#include <vector>

#include "job/bootstrap.h"
#include "job/label_draws.h"
#include "job/measured_draws.h"
#include "job/restore_blurred.h"
#include "job/restore_one.h"
#include "study/shapes.h"

using namespace stillfield;

namespace {

constexpr std::array<int, 4> kSides{96, 128, 192, 256};
constexpr std::array<const char*, 3> kMeasured{"area_fraction", "particle_count", "d50"};

struct Options {
  int images = 16;
  int first = 0;
  int threads = 2;
  SegmentSettings settings;
  std::vector<int> families{0, 1, 2, 3};
  std::vector<double> sigmas{0.4, 0.7, 1.0};
  std::vector<double> blurs{0, 1};
  std::FILE* parts = nullptr;
};

Options parse(int argc, char** argv) {
  Options o;
  if (argc > 1) o.images = std::atoi(argv[1]);
  for (int i = 2; i < argc; ++i) {
    const std::string arg = argv[i];
    if (arg == "--cell" && i + 3 < argc) {
      for (int f = 0; f < 4; ++f) {
        if (study::kFamilyNames[f] == std::string(argv[i + 1])) o.families = {f};
      }
      o.sigmas = {std::atof(argv[i + 2])};
      o.blurs = {std::atof(argv[i + 3])};
      i += 3;
    } else if (arg == "--parts" && i + 1 < argc) {
      o.parts = std::fopen(argv[++i], "a");
    } else if (arg == "--quick") {
      o.settings.target = {1.05, 100, 0.02};
    } else if (i + 1 < argc) {
      const int value = std::atoi(argv[++i]);
      if (arg == "--first") o.first = value;
      if (arg == "--threads") o.threads = value;
      if (arg == "--replicates") o.settings.replicates = value;
    }
  }
  return o;
}

struct Score {
  int images = 0, covered = 0;
  double bias = 0, width = 0;

  void add(double truth, double estimate, double lower, double upper) {
    if (!std::isfinite(truth)) return;
    ++images;
    if (!std::isfinite(estimate)) return;  // not covered
    covered += lower <= truth && truth <= upper;
    bias += estimate - truth;
    width += upper - lower;
  }
};

struct CellScores {
  std::array<Score, kMeasured.size()> before, after;
  double blur = 0;
};

void write_parts(std::FILE* file, const std::string& image, const MeasureKey& key, double truth,
                 const Measurement& plain, const BootstrapErrors& errors) {
  const BootstrapParts parts = bootstrap_parts(errors);
  if (parts.bias.empty() || !std::isfinite(truth)) return;
  std::fprintf(file, "%s,%s,%d,%.9g,%.9g,%.9g", image.c_str(), key.name.c_str(), key.label, truth,
               plain.estimate, errors.value);
  for (std::size_t g = 0; g < parts.bias.size(); ++g) {
    std::fprintf(file, ",%.9g,%.9g", parts.bias[g], parts.within[g]);
  }
  std::fprintf(file, ",%.0f,%.9g,%.9g\n", parts.number, errors.posterior_variance,
               errors.floor_variance);
}

void study_image(const Options& o, study::Family family, double sigma, double blur, int number,
                 const Pool& pool, CellScores& scores) {
  const int side = kSides[static_cast<std::size_t>(number) % kSides.size()];
  const auto seed = static_cast<std::uint64_t>(7000 + number);
  const Volume<std::uint8_t> truth = study::draw_shapes(family, side, seed);
  const Volume<float> image = study::photograph(truth, blur, sigma, seed);
  const GreyLevels grey = make_grey_levels(image.view());
  LabelMeasureSettings measure;
  measure.particles = o.settings.particles;
  const std::vector<MeasureKey> keys = measure_keys(measure);
  const std::vector<double> truths = measure_labels(truth.view(), image.view(), {}, measure);

  JobObserver observer;
  LabelSampling sampling = restore_one(grey, o.settings, seed, pool, observer);
  restore_blurred(o.settings, pool, observer, sampling);
  const Volume<std::uint8_t> found = sampling.counts->most_probable();
  MeasuredDraws draws(found.view(), image.view(), {}, measure, o.settings.chains);
  for_label_draws(o.settings, kMeasuredDraws, pool, observer, sampling,
                  [&](const LabelDraw& draw) { draws.record(draw); });
  const std::vector<Measurement> before = draws.measurements();
  std::vector<Measurement> after = before;
  Bootstrap bootstrap = run_bootstrap({grey, image.view(), {}, measure, o.settings, seed}, pool,
                                      observer, before, sampling);
  correct_measurements(bootstrap, after);
  scores.blur += bootstrap.facts.blur;
  const std::string name = std::string(study::kFamilyNames[static_cast<std::size_t>(family)]) +
                           "," + std::to_string(sigma) + "," + std::to_string(blur) + "," +
                           std::to_string(number);
  for (std::size_t i = 0; i < keys.size(); ++i) {
    if (o.parts != nullptr) {
      write_parts(o.parts, name, keys[i], truths[i], before[i], bootstrap.errors[i]);
    }
    if (keys[i].label != 2) continue;
    for (std::size_t m = 0; m < kMeasured.size(); ++m) {
      if (keys[i].name != kMeasured[m]) continue;
      const Measurement &b = before[i], &a = after[i];
      scores.before[m].add(truths[i], b.estimate, b.lower90, b.upper90);
      scores.after[m].add(truths[i], a.estimate, a.lower90, a.upper90);
    }
  }
}

void print_score(const Score& s) {
  const double n = s.images > 0 ? s.images : 1;
  std::printf(" %.2f | %+.4f | %.4f |", s.covered / n, s.bias / n, s.width / n);
}

}  // namespace

int main(int argc, char** argv) {
  const Options o = parse(argc, argv);
  const Pool pool(o.threads);
  std::printf(
      "| shapes | sigma | blur | blur found | measurement | images | covered before | bias | width "
      "| "
      "covered after | bias | width |\n|---|---|---|---|---|---|---|---|---|---|---|---|\n");
  for (const int family : o.families) {
    for (const double sigma : o.sigmas) {
      for (const double blur : o.blurs) {
        CellScores scores;
        for (int i = o.first; i < o.first + o.images; ++i) {
          study_image(o, static_cast<study::Family>(family), sigma, blur, i, pool, scores);
        }
        for (std::size_t m = 0; m < kMeasured.size(); ++m) {
          std::printf("| %s | %.1f | %.0f | %.2f | %s | %d |", study::kFamilyNames[family], sigma,
                      blur, scores.blur / o.images, kMeasured[m], scores.before[m].images);
          print_score(scores.before[m]);
          print_score(scores.after[m]);
          std::printf("\n");
        }
        std::fflush(stdout);
      }
    }
  }
}
