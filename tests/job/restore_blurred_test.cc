// Labels seen through blur, from image to sample: the blur is found, no rim is invented, sharp
// images are left alone, and draws go on with the blurred chains for any number of threads.
#include "job/restore_blurred.h"

#include <catch2/catch.hpp>
#include <cmath>

#include "job/label_draws.h"
#include "job/restore_one.h"
#include "random/stream.h"

using namespace stillfield;

namespace {

constexpr int kSide = 48;

int truth(int x, int y) {
  if (x < 12) return 1;
  return std::hypot(x - 30.0, y - 24.0) < 11.0 ? 2 : 0;
}

// Three classes, a disk of the third on the first, blurred by `blur` px, noise .1 of the contrast.
GreyLevels scene(double blur) {
  Volume<float> image({kSide, kSide});
  RandomStream random(chain_key(21, 1), Purpose::kSimulation);
  for (int y = 0; y < kSide; ++y) {
    for (int x = 0; x < kSide; ++x) {
      double sum = 0.0, total = 0.0;
      const int r = blur > 0.0 ? 5 : 0;
      for (int j = -r; j <= r; ++j) {
        for (int i = -r; i <= r; ++i) {
          const double h = r > 0 ? std::exp(-0.5 * (i * i + j * j) / (blur * blur)) : 1.0;
          total += h;
          sum += h * truth(x + i, y + j);
        }
      }
      image.at(x, y) = static_cast<float>(sum / total + 0.2 * random.normal());
    }
  }
  return make_grey_levels(image.view());
}

SegmentSettings three_classes() {
  SegmentSettings settings;
  settings.classes = 3;
  settings.blur.mode = BlurMode::kAuto;
  settings.schedule.max_sweeps = 600;
  return settings;
}

// Pixels called class 2 that are not: along the disk's border.
int invented(const LabelSampling& run) {
  const Volume<std::uint8_t> labels = run.counts->most_probable();
  int n = 0;
  for (int y = 0; y < kSide; ++y) {
    for (int x = 15; x < kSide; ++x) n += labels.at(x, y) == 2 ? 1 : 0;
  }
  return n;
}

}  // namespace

TEST_CASE("blur is found and the rim between two classes is not invented") {
  const GreyLevels grey = scene(1.0);
  const SegmentSettings settings = three_classes();
  JobObserver observer;
  std::vector<std::vector<double>> by_threads;
  for (const int threads : {1, 3}) {
    const Pool pool(threads);
    LabelSampling run = restore_one(grey, settings, 5, pool, observer);
    const int before = invented(run);
    restore_blurred(settings, pool, observer, run);
    REQUIRE(run.blur.modelled);
    CHECK(run.blur.lower90 < run.blur.value);
    CHECK(run.blur.value < run.blur.upper90);
    // The interval's half width is about .04 px; .15 is over 5 standard deviations.
    CHECK(std::fabs(run.blur.value - 1.0) < 0.15);
    CHECK(before > 20);  // else there was nothing to mend
    CHECK(invented(run) < before / 4);
    std::vector<double> all;
    for (const NamedSummary& s : run.scalars) all.push_back(s.summary.mean);
    for_label_draws(settings, 1, Pool(1), observer, run, [&](const LabelDraw& d) {
      double sum = 0.0;
      for (int y = 0; y < kSide; ++y) {
        for (int x = 0; x < kSide; ++x) sum += d.labels.at(x, y) * (1.0 + x + kSide * y);
      }
      all.push_back(sum);
    });
    by_threads.push_back(all);
  }
  CHECK(by_threads[0] == by_threads[1]);
}

TEST_CASE("sharp images keep their labels") {
  const GreyLevels grey = scene(0.0);
  const SegmentSettings settings = three_classes();
  JobObserver observer;
  const Pool pool(1);
  LabelSampling run = restore_one(grey, settings, 5, pool, observer);
  const double mean = run.scalars.front().summary.mean;
  restore_blurred(settings, pool, observer, run);
  CHECK_FALSE(run.blur.modelled);
  CHECK(run.blur.value < 0.4);
  CHECK(run.blurred.empty());
  CHECK(run.scalars.front().summary.mean == mean);
}
