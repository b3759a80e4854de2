#include "job/restore_intensity.h"

#include <catch2/catch.hpp>
#include <cmath>
#include <cstring>
#include <limits>

#include "core/error.h"
#include "random/stream.h"

using namespace stillfield;

namespace {

constexpr float kMissing = std::numeric_limits<float>::infinity();

struct Scene {
  Volume<float> truth, value, variance;
};

// A wave, or steps, under noise of the given standard deviation.
Scene make_scene(Extent extent, bool steps, double sd) {
  Scene s{Volume<float>(extent), Volume<float>(extent), Volume<float>(extent)};
  RandomStream random({11, 12}, Purpose::kSimulation);
  for (int z = 0; z < extent.depth; ++z) {
    for (int y = 0; y < extent.height; ++y) {
      for (int x = 0; x < extent.width; ++x) {
        const double wave = 1000.0 + 60.0 * std::sin(0.25 * x) * std::cos(0.2 * y + z);
        const double step = 1000.0 + 80.0 * ((x / 13 + y / 11 + z) % 2);
        const double t = steps ? step : wave;
        s.truth.at(x, y, z) = static_cast<float>(t);
        s.value.at(x, y, z) = static_cast<float>(t + sd * random.normal());
        s.variance.at(x, y, z) = static_cast<float>(sd * sd);
      }
    }
  }
  return s;
}

double rms(const Volume<float>& a, const Volume<float>& b) {
  double sum = 0.0;
  for (int z = 0; z < a.depth(); ++z) {
    for (int y = 0; y < a.height(); ++y) {
      for (int x = 0; x < a.width(); ++x) {
        const double d = static_cast<double>(a.at(x, y, z)) - static_cast<double>(b.at(x, y, z));
        sum += d * d;
      }
    }
  }
  return std::sqrt(sum / static_cast<double>(a.extent().sites()));
}

bool same_bytes(const Volume<float>& a, const Volume<float>& b) {
  for (int z = 0; z < a.depth(); ++z) {
    for (int y = 0; y < a.height(); ++y) {
      if (std::memcmp(a.row(y, z), b.row(y, z),
                      sizeof(float) * static_cast<std::size_t>(a.width())))
        return false;
    }
  }
  return true;
}

IntensityFieldResult restore(const Scene& s, const IntensitySettings& settings, int threads = 1,
                             PixelRedraw* redraw = nullptr) {
  const Pool pool(threads);
  return sample_intensity_field(s.value, s.variance, settings, pool, redraw, {});
}

// One row: both priors then have independent differences of neighbours, so that an image can be
// drawn from them: Gaussian of variance 1 / strength, or Laplace of rate `strength`.
Scene draw_row(IntensityPrior prior, double strength, double sd) {
  const Extent extent{3000, 1, 1};
  Scene s{Volume<float>(extent), Volume<float>(extent), Volume<float>(extent)};
  RandomStream random({13, 14}, Purpose::kSimulation);
  double t = 1000.0;
  for (int x = 0; x < extent.width; ++x) {
    t += prior == IntensityPrior::kSmooth
             ? random.normal() / std::sqrt(strength)
             : (random.uniform() < 0.5 ? -1.0 : 1.0) * random.gamma(1.0) / strength;
    s.truth.at(x, 0) = static_cast<float>(t);
    s.value.at(x, 0) = static_cast<float>(t + sd * random.normal());
    s.variance.at(x, 0) = 1.0f;
  }
  return s;
}

}  // namespace

TEST_CASE("intensity fields take noise away from images that are not theirs") {
  for (const IntensityPrior prior : {IntensityPrior::kSmooth, IntensityPrior::kEdges}) {
    const Scene s = make_scene({60, 50, 1}, prior == IntensityPrior::kEdges, 25.0);
    IntensitySettings settings;
    settings.prior = prior;
    const IntensityFieldResult r = restore(s, settings);
    CAPTURE(static_cast<int>(prior), r.warming_sweeps, r.sampling_sweeps);
    CHECK(r.converged);
    CHECK(r.pixels.relative_mcse <= 0.1);
    CHECK(rms(r.mean, s.truth) < 0.6 * rms(s.value, s.truth));
  }
}

TEST_CASE("strength and noise scale of images from the prior are found") {
  for (const IntensityPrior prior : {IntensityPrior::kSmooth, IntensityPrior::kEdges}) {
    const double strength = prior == IntensityPrior::kSmooth ? 1.0 / 400.0 : 1.0 / 14.0;
    const double sd = 15.0;
    const Scene s = draw_row(prior, strength, sd);
    IntensitySettings settings;
    settings.prior = prior;
    settings.noise_scale_known = false;
    settings.quick = true;
    const IntensityFieldResult r = restore(s, settings);
    CAPTURE(static_cast<int>(prior), r.warming_sweeps, r.sampling_sweeps);
    REQUIRE(r.scalars.size() == 2);
    CHECK(r.scalars[0].name == "prior_strength");
    CHECK(r.scalars[1].name == "noise_scale");
    // Truth within 4 posterior standard deviations (false alarm below 1e-4), and those are narrow.
    const TraceSummary& l = r.scalars[0].summary;
    const TraceSummary& n = r.scalars[1].summary;
    CHECK(std::fabs(l.mean - strength) < 4.0 * l.sd);
    CHECK(std::fabs(n.mean - sd) < 4.0 * n.sd);
    CHECK(l.sd < 0.2 * strength);
    CHECK(n.sd < 0.1 * sd);
  }
}

TEST_CASE("restored intensities have the same bytes for any number of threads") {
  for (const IntensityPrior prior : {IntensityPrior::kSmooth, IntensityPrior::kEdges}) {
    // Chains side by side, and bands of rows.
    for (const Extent extent : {Extent{40, 30, 1}, Extent{322, 321, 1}}) {
      if (prior == IntensityPrior::kEdges && extent.width > 40) continue;  // slow; the same path
      Scene s = make_scene(extent, true, 25.0);
      s.variance.at(3, 4) = kMissing;
      IntensitySettings settings;
      settings.prior = prior;
      settings.quick = true;
      settings.max_sweeps = 600;
      settings.chains = 2;
      settings.samples = 3;
      const IntensityFieldResult one = restore(s, settings, 1);
      const IntensityFieldResult three = restore(s, settings, 3);
      CHECK(same_bytes(one.mean, three.mean));
      CHECK(same_bytes(one.variance, three.variance));
      REQUIRE(one.draws.size() == 3);
      for (std::size_t i = 0; i < 3; ++i) CHECK(same_bytes(one.draws[i], three.draws[i]));
      CHECK_FALSE(same_bytes(one.draws[0], one.draws[2]));
    }
  }
}

TEST_CASE("missing pixels are filled from their neighbours with more uncertainty") {
  Scene s = make_scene({40, 40, 1}, false, 10.0);
  for (int y = 10; y < 13; ++y) {
    for (int x = 20; x < 24; ++x) {
      s.variance.at(x, y) = kMissing;
      s.value.at(x, y) = std::numeric_limits<float>::quiet_NaN();
    }
  }
  const IntensityFieldResult r = restore(s, {});
  CHECK(std::isfinite(r.mean.at(21, 11)));
  CHECK(std::fabs(r.mean.at(21, 11) - s.truth.at(21, 11)) < 5.0 * std::sqrt(r.variance.at(21, 11)));
  CHECK(r.variance.at(21, 11) > 1.5f * r.variance.at(5, 30));
}

TEST_CASE("volumes and pixels of a constant or tiny image are restored") {
  IntensitySettings settings;
  settings.quick = true;
  settings.connectivity = Connectivity::kSix;
  const Scene volume = make_scene({20, 18, 6}, false, 20.0);
  const IntensityFieldResult r = restore(volume, settings);
  CHECK(rms(r.mean, volume.truth) < 0.7 * rms(volume.value, volume.truth));
  settings.connectivity = Connectivity::kEight;
  for (const IntensityPrior prior : {IntensityPrior::kSmooth, IntensityPrior::kEdges}) {
    settings.prior = prior;
    settings.noise_scale_known = false;
    Scene flat = make_scene({12, 9, 1}, false, 0.0);
    for (int y = 0; y < 9; ++y) {
      for (int x = 0; x < 12; ++x) {
        flat.value.at(x, y) = 77.0f;
        flat.variance.at(x, y) = 1.0f;
      }
    }
    const IntensityFieldResult constant = restore(flat, settings);
    CHECK(std::fabs(constant.mean.at(5, 5) - 77.0f) < 0.01f);
    settings.noise_scale_known = true;
    const Scene dot = make_scene({1, 1, 1}, false, 5.0);
    const IntensityFieldResult single = restore(dot, settings);
    // One pixel and a flat prior: the posterior is N(y, variance).
    CHECK(single.mean.at(0, 0) == Approx(dot.value.at(0, 0)).margin(2.0));
    CHECK(single.variance.at(0, 0) == Approx(25.0).epsilon(0.25));
  }
}

namespace {

// Known values for checked pixels: what a redraw returns must reach the field.
class PinnedPixel : public PixelRedraw {
 public:
  void redraw(const IntensityMoments& now, std::uint32_t sweep, const Pool&,
              Volume<float>& value) override {
    ++calls;
    last = sweep;
    finite = finite && std::isfinite(now.mean.at(1, 1)) && now.variance.at(1, 1) == 0.0f;
    value.at(8, 8) = 5000.0f;
  }
  int calls = 0;
  std::uint32_t last = 0;
  bool finite = true;
};

}  // namespace

TEST_CASE("redrawn values replace the image's in every sweep") {
  const Scene s = make_scene({20, 20, 1}, false, 10.0);
  IntensitySettings settings;
  settings.quick = true;
  PinnedPixel redraw;
  const IntensityFieldResult r = restore(s, settings, 2, &redraw);
  CHECK(redraw.finite);
  CHECK(redraw.calls == 4 * (r.warming_sweeps + r.sampling_sweeps));
  CHECK(redraw.last == static_cast<std::uint32_t>(redraw.calls - 1));
  CHECK(r.mean.at(8, 8) > s.truth.at(8, 8) + 100.0f);
}

TEST_CASE("bad settings and images of nothing are refused") {
  Scene s = make_scene({6, 5, 1}, false, 10.0);
  IntensitySettings settings;
  settings.max_sweeps = 100;
  CHECK_THROWS_AS(restore(s, settings), Error);
  settings = {};
  settings.chains = 1;
  CHECK_THROWS_AS(restore(s, settings), Error);
  s.variance.at(2, 2) = 0.0f;
  CHECK_THROWS_AS(restore(s, {}), Error);
  s.variance.at(2, 2) = 1.0f;
  s.value.at(2, 2) = std::numeric_limits<float>::quiet_NaN();
  CHECK_THROWS_AS(restore(s, {}), Error);
  for (int y = 0; y < 5; ++y) {
    for (int x = 0; x < 6; ++x) s.variance.at(x, y) = kMissing;
  }
  CHECK_THROWS_AS(restore(s, {}), Error);
  s = make_scene({6, 5, 1}, false, 10.0);
  const Pool pool(1);
  CHECK_THROWS_AS(
      sample_intensity_field(s.value, s.variance, {}, pool, nullptr, [](int, int) { return true; }),
      Error);
}
