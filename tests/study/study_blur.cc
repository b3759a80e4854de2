// What modelling the optics' blur does to labels: disks of class 3, with or without a true rim of
// class 2, on class 1; contrast 1, class 2 half-way.
//
// usage: study_blur IMAGES BLUR SIGMA [--rim] [--two] [--area] [--given] [--side N]
//   --two    classes 1 and 3 only        --area   brightness averaged over 5 x 5 points a pixel
//   --given  tells the program the blur instead of letting it estimate
// Prints Markdown rows, plain run then blur-aware run (CPU seconds, the plain run before it
// included). Results: docs/trust.md.
#include <cmath>
#include <cstdio>
#include <cstdlib>
#include <ctime>
#include <string>
#include <vector>

#include "job/restore_blurred.h"
#include "job/restore_one.h"

using namespace stillfield;

namespace {

struct Options {
  int images = 10, side = 128, classes = 3;
  double blur = 1.0, sigma = 0.1;
  bool rim = false, area = false, given = false;
};

struct Disk {
  double x, y, radius;
};

// Class at a point: 0-based.
int class_at(const std::vector<Disk>& disks, const Options& o, double x, double y) {
  int label = 0;
  for (const Disk& d : disks) {
    const double r = std::sqrt((x - d.x) * (x - d.x) + (y - d.y) * (y - d.y));
    if (r <= d.radius) return o.classes - 1;
    if (o.rim && r <= d.radius + 4.0) label = 1;
  }
  return label;
}

struct Scene {
  Volume<std::uint8_t> truth;  // 0-based, at pixel centres
  Volume<float> image;
};

Scene make_scene(const Options& o, std::uint64_t seed) {
  RandomStream random(chain_key(seed, 0), Purpose::kSimulation);
  std::vector<Disk> disks;
  const int count = 8 + static_cast<int>(random.uniform() * 10.0);
  for (int i = 0; i < count; ++i) {
    disks.push_back(
        {o.side * random.uniform(), o.side * random.uniform(), 3.0 + 11.0 * random.uniform()});
  }
  // Without rims class 2 has places of its own: a stripe at the left.
  const auto label = [&](double x, double y) {
    const int k = class_at(disks, o, x, y);
    return o.classes == 3 && !o.rim && k == 0 && x < 0.15 * o.side ? 1 : k;
  };
  const double step = 1.0 / (o.classes - 1);
  Scene scene{Volume<std::uint8_t>({o.side, o.side}), Volume<float>({o.side, o.side})};
  const int margin = 10, wide = o.side + 2 * margin, points = o.area ? 5 : 1;
  std::vector<double> clean(static_cast<std::size_t>(wide * wide)), rows(clean.size());
  const auto at = [&](int x, int y) {
    return static_cast<std::size_t>((y + margin) * wide + x + margin);
  };
  for (int y = -margin; y < o.side + margin; ++y) {
    for (int x = -margin; x < o.side + margin; ++x) {
      for (int j = 0; j < points; ++j) {
        for (int i = 0; i < points; ++i) {
          clean[at(x, y)] +=
              step * label(x + (i + 0.5) / points, y + (j + 0.5) / points) / (points * points);
        }
      }
    }
  }
  std::vector<double> h(2 * margin + 1, 0.0);
  double total = 0.0;
  for (int i = -margin; i <= margin; ++i)
    total += h[static_cast<std::size_t>(i + margin)] =
        o.blur > 0 ? std::exp(-0.5 * i * i / (o.blur * o.blur)) : (i == 0);
  for (double& v : h) v /= total;
  for (int y = -margin; y < o.side + margin; ++y) {
    for (int x = 0; x < o.side; ++x) {
      for (int i = -margin; i <= margin; ++i)
        rows[at(x, y)] += h[static_cast<std::size_t>(i + margin)] * clean[at(x + i, y)];
    }
  }
  RandomStream noise(chain_key(seed, 1), Purpose::kSimulation, 1);
  for (int y = 0; y < o.side; ++y) {
    for (int x = 0; x < o.side; ++x) {
      double v = 0.0;
      for (int i = -margin; i <= margin; ++i)
        v += h[static_cast<std::size_t>(i + margin)] * rows[at(x, y + i)];
      scene.image.at(x, y) = static_cast<float>(v + o.sigma * noise.normal());
      scene.truth.at(x, y) = static_cast<std::uint8_t>(label(x + 0.5, y + 0.5));
    }
  }
  return scene;
}

// Pixels with another class among the four neighbours.
std::int64_t border_pixels(const Volume<std::uint8_t>& z) {
  std::int64_t n = 0;
  for (int y = 1; y + 1 < z.height(); ++y) {
    for (int x = 1; x + 1 < z.width(); ++x) {
      const int a = z.at(x, y);
      n += z.at(x - 1, y) != a || z.at(x + 1, y) != a || z.at(x, y - 1) != a || z.at(x, y + 1) != a;
    }
  }
  return n;
}

struct Tally {
  double invented = 0, wrong = 0, seconds = 0, sweeps = 0;
  std::vector<double> bias = std::vector<double>(3, 0.0), square = std::vector<double>(3, 0.0);
  std::vector<int> covered = std::vector<int>(3, 0);
  int converged = 0;
};

void tally(const Options& o, const Scene& scene, const LabelSampling& run, double seconds,
           Tally& t) {
  const Volume<std::uint8_t> labels = run.counts->most_probable();
  std::vector<double> fraction(3, 0.0);
  std::int64_t invented = 0, wrong = 0;
  for (int y = 0; y < o.side; ++y) {
    for (int x = 0; x < o.side; ++x) {
      const int truth = scene.truth.at(x, y), found = labels.at(x, y) - 1;
      fraction[static_cast<std::size_t>(truth)] += 1.0 / (o.side * o.side);
      invented += o.classes == 3 && found == 1 && truth != 1;
      wrong += found != truth;
    }
  }
  t.invented += static_cast<double>(invented) / static_cast<double>(border_pixels(scene.truth));
  t.wrong += static_cast<double>(wrong) / (o.side * o.side);
  for (int k = 0; k < o.classes; ++k) {
    const auto i = static_cast<std::size_t>(k);
    const TraceSummary& s = run.scalars[i].summary;
    t.bias[i] += s.mean - fraction[i];
    t.square[i] += (s.mean - fraction[i]) * (s.mean - fraction[i]);
    t.covered[i] += s.lower90 <= fraction[i] && fraction[i] <= s.upper90;
  }
  t.converged += run.verdict.converged;
  t.sweeps += run.warming_sweeps + run.sampling_sweeps;
  t.seconds += seconds;
}

void print(const Options& o, const char* name, const Tally& t, double b, double b_sd) {
  const double n = o.images;
  std::printf("| %d%s%s | %.1f | %.2f | %s | %.3f ± %.3f | %.3f | %.4f |", o.classes,
              o.rim ? " rim" : "", o.area ? " area" : "", o.blur, o.sigma, name, b / n,
              std::sqrt(std::max(0.0, b_sd / n - b * b / n / n)), t.invented / n, t.wrong / n);
  for (int k = 0; k < o.classes; ++k) {
    const auto i = static_cast<std::size_t>(k);
    std::printf(" %+.4f (%.4f, %.2f) |", t.bias[i] / n, std::sqrt(t.square[i] / n),
                t.covered[i] / n);
  }
  std::printf(" %d/%d | %.0f | %.2f |\n", t.converged, o.images, t.sweeps / n, t.seconds / n);
  std::fflush(stdout);
}

}  // namespace

int main(int argc, char** argv) {
  Options o;
  int place = 0;
  for (int i = 1; i < argc; ++i) {
    const std::string a = argv[i];
    if (a == "--rim")
      o.rim = true;
    else if (a == "--two")
      o.classes = 2;
    else if (a == "--area")
      o.area = true;
    else if (a == "--given")
      o.given = true;
    else if (a == "--side")
      o.side = std::atoi(argv[++i]);
    else if (place++ == 0)
      o.images = std::atoi(argv[i]);
    else if (place == 2)
      o.blur = std::atof(argv[i]);
    else
      o.sigma = std::atof(argv[i]);
  }
  const Pool pool(1);
  JobObserver observer;
  Tally plain, aware;
  double b = 0, b2 = 0;
  for (int i = 0; i < o.images; ++i) {
    const auto seed = static_cast<std::uint64_t>(500 + i);
    const Scene scene = make_scene(o, seed);
    const GreyLevels grey = make_grey_levels(scene.image.view());
    SegmentSettings settings;
    settings.classes = o.classes;
    settings.blur.mode = o.given ? BlurMode::kGiven : BlurMode::kAuto;
    settings.blur.value = o.blur;
    const std::clock_t begin = std::clock();
    const auto seconds = [&] { return static_cast<double>(std::clock() - begin) / CLOCKS_PER_SEC; };
    LabelSampling run = restore_one(grey, settings, seed, pool, observer);
    tally(o, scene, run, seconds(), plain);
    restore_blurred(settings, pool, observer, run);
    tally(o, scene, run, seconds(), aware);
    if (std::getenv("VERBOSE")) {
      std::printf("  %d b %.3f [%.3f, %.3f] %d beta %.2f sd", i, run.blur.value, run.blur.lower90,
                  run.blur.upper90, run.blur.modelled, run.prior.beta);
      for (double s : run.chains[0].model.classes.sd) std::printf(" %.3f", s);
      std::printf("\n");
    }
    b += run.blur.value;
    b2 += run.blur.value * run.blur.value;
  }
  print(o, "plain", plain, 0, 0);
  print(o, "blur-aware", aware, b, b2);
}
