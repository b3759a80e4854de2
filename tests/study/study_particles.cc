// Number and sizes of discs found by `segment` on synthetic fields, against what is known.
//
// usage: study_particles separate|touching IMAGES [SIGMA ...]
// Discs of label 1 on label 0 in a field of 192^2 pixels: centres uniform over the field and beyond
// its edges, radii uniform in [3, 9] px. `separate`: at least 4 px of ground between any two.
// `touching`: each has a partner of its own size whose edge lies 1 px within its own.
// Known: number of centres in the field, median of 2 r. Also compared with the same measurement on
// the true labels, which has the same scatter from the edge correction.
// Prints one Markdown row a noise level, smallest area and way of counting. Results: docs/trust.md.
#include <algorithm>
#include <array>
#include <cmath>
#include <cstdio>
#include <cstdlib>
#include <string>
#include <vector>

#include "job/label_draws.h"
#include "job/measured_draws.h"
#include "job/restore_one.h"
#include "study/synthetic.h"

using namespace stillfield;

namespace {

constexpr int kSide = 192;
constexpr double kSmallest = 3, kLargest = 9, kGap = 4;
constexpr std::array<std::int64_t, 3> kMinAreas{1, 4, 9};

struct Disc {
  double x, y, r;
};

struct Scene {
  std::vector<Disc> discs;
  study::TruthField truth;
  double count = 0;              // of centres in the field
  std::vector<double> diameter;  // of these
};

bool free_place(const Disc& disc, const std::vector<Disc>& discs) {
  return std::all_of(discs.begin(), discs.end(), [&](const Disc& d) {
    return std::hypot(d.x - disc.x, d.y - disc.y) >= d.r + disc.r + kGap;
  });
}

Scene draw_scene(bool touching, std::uint64_t seed) {
  RandomStream random(chain_key(seed, 0), Purpose::kSimulation);
  Scene scene;
  scene.truth.labels = Volume<std::uint8_t>({kSide, kSide});
  const double side = kSide + 6 * kLargest;
  // Tries, not discs, are fixed: the discs of a window then are those of a larger plane.
  for (int tried = 0; tried < 90; ++tried) {
    Disc disc{side * random.uniform() - 3 * kLargest, side * random.uniform() - 3 * kLargest,
              kSmallest + (kLargest - kSmallest) * random.uniform()};
    const double turn = 2 * M_PI * random.uniform();
    Disc partner{disc.x + (2 * disc.r - 1) * std::cos(turn),
                 disc.y + (2 * disc.r - 1) * std::sin(turn), disc.r};
    const bool fits =
        free_place(disc, scene.discs) && (!touching || free_place(partner, scene.discs));
    if (!fits) continue;
    scene.discs.push_back(disc);
    if (touching) scene.discs.push_back(partner);
  }
  for (const Disc& d : scene.discs) {
    for (int y = 0; y < kSide; ++y) {
      for (int x = 0; x < kSide; ++x) {
        if (std::hypot(x + 0.5 - d.x, y + 0.5 - d.y) <= d.r) scene.truth.labels.at(x, y) = 1;
      }
    }
    if (d.x >= 0 && d.x < kSide && d.y >= 0 && d.y < kSide) {
      ++scene.count;
      scene.diameter.push_back(2 * d.r);
    }
  }
  return scene;
}

// The smallest value that at least half do not exceed, as measure/particles.h takes it.
double median(std::vector<double> values) {
  std::sort(values.begin(), values.end());
  return values.empty() ? 0 : values[(values.size() - 1) / 2];
}

// Sums over images of a count and a D50.
struct Sums {
  double count = 0, d50 = 0, covered = 0;
  void add(double c, double d) {
    count += c;
    d50 += d;
  }
};

const Measurement& of(const std::vector<Measurement>& list, const std::string& name) {
  return *std::find_if(list.begin(), list.end(),
                       [&](const Measurement& m) { return m.name == name && m.label == 2; });
}

void run_level(bool touching, int images, double sigma) {
  const Pool pool(1);
  JobObserver observer;
  Sums known;
  std::array<Sums, kMinAreas.size()> on_truth{}, on_labels{}, over_draws{};
  for (int i = 0; i < images; ++i) {
    const auto seed = static_cast<std::uint64_t>(5000 + i);
    const Scene scene = draw_scene(touching, seed);
    known.add(scene.count, median(scene.diameter));
    const Volume<float> image = study::add_noise(scene.truth, sigma, seed);
    Volume<std::uint8_t> truth(image.extent());
    for (int y = 0; y < kSide; ++y) {
      for (int x = 0; x < kSide; ++x) {
        truth.at(x, y) = static_cast<std::uint8_t>(scene.truth.labels.at(x, y) + 1);
      }
    }
    SegmentSettings settings;
    const GreyLevels grey = make_grey_levels(image.view());
    LabelSampling run = restore_one(grey, settings, seed, pool, observer);
    const Volume<std::uint8_t> labels = run.counts->most_probable();
    std::vector<MeasuredDraws> measured;
    measured.reserve(kMinAreas.size());
    std::vector<LabelMeasureSettings> how(kMinAreas.size());
    for (std::size_t a = 0; a < kMinAreas.size(); ++a) {
      how[a].particles.min_area = kMinAreas[a];
      measured.emplace_back(labels.view(), image.view(), View<const std::uint8_t>{}, how[a],
                            settings.chains);
    }
    for_label_draws(settings, kMeasuredDraws, pool, observer, run, [&](const LabelDraw& draw) {
      for (MeasuredDraws& m : measured) m.record(draw);
    });
    for (std::size_t a = 0; a < kMinAreas.size(); ++a) {
      const auto values = [&](View<const std::uint8_t> view) {
        return measure_labels(view, image.view(), {}, how[a]);
      };
      const std::vector<double> t = values(truth.view()), l = values(labels.view());
      on_truth[a].add(t[10], t[13]);
      on_labels[a].add(l[10], l[13]);
      const std::vector<Measurement> list = measured[a].measurements();
      const Measurement& count = of(list, "particle_count");
      over_draws[a].add(count.estimate, of(list, "d50").estimate);
      over_draws[a].covered += count.lower90 <= t[10] && t[10] <= count.upper90;
    }
  }
  const auto row = [&](std::size_t a, const char* way, const Sums& s) {
    std::printf("| %.1f | %d | %s | %+.2f | %+.2f | %+.2f | %+.2f |", sigma,
                static_cast<int>(kMinAreas[a]), way, 100 * (s.count / on_truth[a].count - 1),
                100 * (s.d50 / on_truth[a].d50 - 1), 100 * (s.count / known.count - 1),
                100 * (s.d50 / known.d50 - 1));
    if (&s == &over_draws[a])
      std::printf(" %.2f |\n", s.covered / images);
    else
      std::printf(" |\n");
  };
  for (std::size_t a = 0; a < kMinAreas.size(); ++a) {
    row(a, "true labels", on_truth[a]);
    row(a, "most probable labels", on_labels[a]);
    row(a, "mean over draws", over_draws[a]);
  }
  std::printf("(%.1f discs an image)\n", known.count / images);
  std::fflush(stdout);
}

}  // namespace

int main(int argc, char** argv) {
  const std::vector<std::string> args(argv + 1, argv + argc);
  const bool touching = !args.empty() && args[0] == "touching";
  const int images = args.size() > 1 ? std::atoi(args[1].c_str()) : 20;
  std::vector<double> sigmas;
  for (std::size_t i = 2; i < args.size(); ++i) sigmas.push_back(std::atof(args[i].c_str()));
  if (sigmas.empty()) sigmas = {0.3, 0.6};
  std::printf(
      "| sigma | min area | counted on | count, %% of that on true labels | D50 | count, %% of "
      "known | D50 | truth's count within 90 %% interval |\n|---|---|---|---|---|---|---|---|\n");
  for (const double sigma : sigmas) run_level(touching, images, sigma);
}
