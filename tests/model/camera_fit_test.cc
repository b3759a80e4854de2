#include "model/camera_fit.h"

#include <catch2/catch.hpp>
#include <cmath>

#include "core/error.h"
#include "model/noise_scene.h"

using namespace stillfield;
using namespace stillfield::testing;

namespace {

struct Camera {
  double gain, offset, read_electrons, saturation;  // saturation in grey values
  int hot = 0;                                      // so many pixels of the first row
};

// y = round(offset + pattern + gain (Poisson(electrons) + read n)), clipped to 0 .. saturation. The
// fixed pattern is the same in every frame.
Volume<float> frame(const Camera& c, double electrons, RandomStream& random) {
  constexpr int kSide = 96;
  Volume<float> out({kSide, kSide});
  for (int y = 0; y < kSide; ++y) {
    for (int x = 0; x < kSide; ++x) {
      const double pattern = 0.3 * c.gain * ((x * 7 + y * 13) % 5 - 2);
      const double light = electrons * (1.0 + 0.01 * ((x + 3 * y) % 7 - 3));
      const double e =
          static_cast<double>(random.poisson(light)) + c.read_electrons * random.normal();
      const double hot = y == 0 && x < c.hot ? 60.0 * c.gain * c.read_electrons : 0.0;
      const double v = std::floor(c.offset + pattern + hot + c.gain * e + 0.5);
      out.at(x, y) = static_cast<float>(std::min(std::max(v, 0.0), c.saturation));
    }
  }
  return out;
}

CameraModel simulate(const Camera& c, std::uint64_t seed) {
  RandomStream random = scene_random(seed);
  CameraFit fit;
  for (int i = 0; i < 6; ++i) fit.add_dark(frame(c, 0.0, random).view());
  const double full = (c.saturation - c.offset) / c.gain;
  for (const double share : {0.05, 0.15, 0.3, 0.45, 0.6, 0.8, 1.3}) {
    for (int i = 0; i < 4; ++i) fit.add_flat(share, frame(c, share * full, random).view());
  }
  return fit.fit(true);
}

Volume<float> constant(int side, float value) {
  Volume<float> v({side, side});
  for (int y = 0; y < side; ++y) std::fill_n(v.row(y), side, value);
  return v;
}

}  // namespace

TEST_CASE("simulated cameras are recovered within 2 %") {
  // 12 and 16 bits. Standard errors: gain 0.4 %, read noise 0.4 %; 2 % is five of them. One frame's
  // read noise holds 1/12 of rounding (EMVA 1288).
  for (const Camera& c : {Camera{0.8, 100.0, 3.0, 4095.0}, Camera{2.5, 500.0, 2.0, 65535.0},
                          Camera{0.25, 64.0, 6.0, 4095.0}}) {
    const CameraModel m = simulate(c, 81);
    CAPTURE(c.gain, m.gain, m.gain_error, m.offset, m.read_noise);
    CHECK(m.gain == Approx(c.gain).epsilon(0.02));
    CHECK(std::fabs(m.gain - c.gain) < 5.0 * m.gain_error);
    CHECK(m.offset == Approx(c.offset).epsilon(0.02));
    const double read = std::sqrt(c.gain * c.gain * c.read_electrons * c.read_electrons + 1.0 / 12);
    CHECK(m.read_noise == Approx(read).epsilon(0.02));
    REQUIRE(m.saturation);
    CHECK(*m.saturation == Approx(c.saturation).epsilon(0.02));
    CHECK(m.linearity_percent < 0.5);
    CHECK(m.hot_pixels == 0);
    REQUIRE(m.levels.size() == 8);
    CHECK(m.levels[5].used);
    CHECK_FALSE(m.levels[6].used);  // above 70 % of saturation
    CHECK(m.levels[7].capped_share > 0.9);
  }
}

TEST_CASE("hot pixels are mapped, kept out of the sums and in the offset map") {
  Camera c{0.8, 100.0, 3.0, 4095.0};
  c.hot = 9;
  const CameraModel m = simulate(c, 82);
  CHECK(m.hot_pixels == 9);
  for (int x = 0; x < 12; ++x) CHECK(m.hot.at(x, 0) == (x < 9 ? 1 : 0));
  CHECK(m.offset == Approx(100.0).epsilon(0.005));
  CHECK(m.offset_map.at(3, 0) > 200.0f);
  CHECK(m.gain == Approx(0.8).epsilon(0.02));
}

TEST_CASE("a response that bends shows as linearity residual") {
  RandomStream random = scene_random(83);
  const Camera c{1.0, 100.0, 3.0, 65535.0};
  CameraFit fit;
  for (int i = 0; i < 3; ++i) fit.add_dark(frame(c, 0.0, random).view());
  for (const double t : {1.0, 2.0, 3.0, 4.0, 5.0}) {
    const double electrons = 1000.0 * t - 40.0 * t * t;
    for (int i = 0; i < 2; ++i) fit.add_flat(t, frame(c, electrons, random).view());
  }
  // Largest residual of the least-squares line of 1000 t - 40 t^2 at 1..5: 80 of 4000.
  CHECK(fit.fit(true).linearity_percent == Approx(100.0 * 80.0 / 4000.0).epsilon(0.1));
  CHECK(std::isnan(fit.fit(false).linearity_percent));
  CHECK_FALSE(fit.fit(true).saturation);
}

TEST_CASE("what a camera fit cannot use is refused in one sentence") {
  RandomStream random = scene_random(84);
  const Camera c{1.0, 100.0, 3.0, 4095.0};
  const auto dark = [&] {
    CameraFit fit;
    for (int i = 0; i < 2; ++i) fit.add_dark(frame(c, 0.0, random).view());
    return fit;
  };
  CameraFit one;
  one.add_dark(frame(c, 0.0, random).view());
  CHECK_THROWS_WITH(one.add_flat(1, frame(c, 500.0, random).view()),
                    Catch::Contains("two dark frames"));
  CHECK_THROWS_WITH(dark().fit(true), Catch::Contains("no flat frame"));
  CHECK_THROWS_WITH(dark().add_flat(1, constant(32, 5.0f).view()), Catch::Contains("one size"));

  CameraFit single = dark();
  single.add_flat(1, frame(c, 500.0, random).view());
  CHECK_THROWS_WITH(single.fit(true), Catch::Contains("only one flat frame at level 1"));

  CameraFit level = dark();
  for (int i = 0; i < 3; ++i) level.add_flat(1, frame(c, 500.0, random).view());
  CHECK_THROWS_WITH(level.fit(true), Catch::Contains("all at one level"));

  CameraFit saturated = dark();
  for (const double l : {1.0, 2.0}) {
    for (int i = 0; i < 2; ++i) saturated.add_flat(l, frame(c, 9000.0 * l, random).view());
  }
  CHECK_THROWS_WITH(saturated.fit(true), Catch::Contains("saturated"));

  CameraFit unlit = dark();
  for (int i = 0; i < 2; ++i) unlit.add_flat(1, constant(96, 50.0f).view());
  CHECK_THROWS_AS(unlit.fit(true), Error);
  CHECK_THROWS_AS(unlit.add_dark(frame(c, 0.0, random).view()), Error);
}
