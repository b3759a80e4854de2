// The bootstrap on a scene with known truth: same results for any number of threads, blur found,
// measurements kept and corrected as the header says.
#include "job/bootstrap.h"

#include <catch2/catch.hpp>
#include <cmath>

#include "job/edge_blur.h"
#include "job/label_draws.h"
#include "job/measured_draws.h"
#include "job/restore_one.h"
#include "model/label_scene.h"
#include "random/stream.h"

using namespace stillfield;

namespace {

// Four disks of radius 8 on a field of 64^2.
Volume<std::uint8_t> disks() {
  Volume<std::uint8_t> labels({64, 64});
  for (int y = 0; y < 64; ++y) {
    for (int x = 0; x < 64; ++x) {
      const double dx = (x & 31) - 15.5, dy = (y & 31) - 15.5;
      labels.at(x, y) = dx * dx + dy * dy <= 64 ? 2 : 1;
    }
  }
  return labels;
}

Volume<float> photograph(const Volume<std::uint8_t>& labels, double blur, double sigma) {
  Volume<double> clean(labels.extent());
  for (int y = 0; y < 64; ++y) {
    for (int x = 0; x < 64; ++x) clean.at(x, y) = labels.at(x, y);
  }
  clean = blurred(clean, blur);
  RandomStream random(chain_key(21, 0), Purpose::kSimulation);
  Volume<float> image(labels.extent());
  for (int y = 0; y < 64; ++y) {
    for (int x = 0; x < 64; ++x) {
      image.at(x, y) = static_cast<float>(clean.at(x, y) + sigma * random.normal());
    }
  }
  return image;
}

struct Result {
  std::vector<Measurement> before, after;
  BootstrapFacts facts;
};

Result analyse(const Volume<float>& image, int threads) {
  const GreyLevels grey = make_grey_levels(image.view());
  SegmentSettings settings;
  settings.target = {1.05, 100, 0.02};
  settings.schedule.max_sweeps = 1200;
  settings.replicates = 6;
  const LabelMeasureSettings measure;
  const Pool pool(threads);
  JobObserver observer;
  LabelSampling sampling = restore_one(grey, settings, 77, pool, observer);
  const Volume<std::uint8_t> found = sampling.counts->most_probable();
  MeasuredDraws draws(found.view(), image.view(), {}, measure, settings.chains);
  for_label_draws(settings, 10, pool, observer, sampling,
                  [&](const LabelDraw& draw) { draws.record(draw); });
  Result result;
  result.before = result.after = draws.measurements();
  Bootstrap bootstrap = run_bootstrap({grey, image.view(), {}, measure, settings, 77}, pool,
                                      observer, result.before, sampling);
  correct_measurements(bootstrap, result.after);
  result.facts = bootstrap.facts;
  return result;
}

const Measurement& find(const std::vector<Measurement>& list, const std::string& name) {
  for (const Measurement& m : list) {
    if (m.name == name && m.label == 2) return m;
  }
  FAIL("no measurement " << name);
  return list.front();
}

}  // namespace

TEST_CASE("the blur of a leak lies between those of the simulations") {
  // Leaks at 0, .5, 1 and 1.5 px; by hand.
  CHECK(interpolate_blur(-0.1, {0.0, 0.1, 0.3, 0.4}) == 0);
  CHECK(interpolate_blur(0.2, {0.0, 0.1, 0.3, 0.4}) == Approx(0.75));
  CHECK(interpolate_blur(0.35, {0.0, 0.1, 0.3, 0.4}) == Approx(1.25));
  CHECK(interpolate_blur(0.9, {0.0, 0.1, 0.3, 0.4}) == Approx(1.5));
  CHECK(interpolate_blur(0.04, {0.0, 0.1, 0.3, 0.4}) == 0);  // .2 px is not told from none
  CHECK(interpolate_blur(0.2, {0.0, -0.1, 0.4, 0.3}) == Approx(0.75));  // never falling
}

TEST_CASE("bootstrapped measurements are the same for any number of threads and hold the truth") {
  const Volume<std::uint8_t> truth = disks();
  const Volume<float> image = photograph(truth, 1.0, 0.4);
  const Result one = analyse(image, 1);
  const Result three = analyse(image, 3);
  REQUIRE(one.after.size() == three.after.size());
  for (std::size_t i = 0; i < one.after.size(); ++i) {
    CAPTURE(one.after[i].name, one.after[i].label);
    // NaN in both or equal to the last bit.
    const auto same = [](double a, double b) { return a == b || (std::isnan(a) && std::isnan(b)); };
    CHECK(same(one.after[i].estimate, three.after[i].estimate));
    CHECK(same(one.after[i].lower95, three.after[i].lower95));
    CHECK(same(one.after[i].plain_estimate, one.before[i].estimate));
    CHECK(same(one.after[i].mcse, one.before[i].mcse));
  }
  CHECK(one.facts.replicates == 6);
  CHECK(one.facts.corrected > 8);
  // Blur 1 px; leaks of single images of this size scatter by about .02, which is .2 px (measured;
  // docs/trust.md).
  CHECK(one.facts.blur == Approx(1.0).margin(0.6));

  // 90 % intervals of one fixed image: this is a check of gross errors, not of coverage.
  const LabelMeasureSettings measure;
  const std::vector<double> truths = measure_labels(truth.view(), image.view(), {}, measure);
  const std::vector<MeasureKey> keys = measure_keys(measure);
  for (std::size_t i = 0; i < keys.size(); ++i) {
    if (keys[i].label != 2) continue;
    if (keys[i].name != "area_fraction" && keys[i].name != "particle_count" &&
        keys[i].name != "d50") {
      continue;
    }
    CAPTURE(keys[i].name, truths[i]);
    const Measurement& m = find(one.after, keys[i].name);
    CHECK(m.lower95 <= truths[i]);
    CHECK(truths[i] <= m.upper95);
    CHECK(m.lower95 <= m.lower90);
    CHECK(m.lower90 <= m.estimate);
    CHECK(m.estimate <= m.upper90);
    CHECK(m.upper90 <= m.upper95);
    CHECK(m.lower95 >= 0);
  }
}
