#include "job/settings.h"

#include <catch2/catch.hpp>

#include "report/record.h"

using namespace stillfield;

namespace {

std::string digest(const SegmentSettings& settings) {
  return settings_digest(named_settings(settings), std::string(64, 'a'), 1);
}

}  // namespace

TEST_CASE("every setting that changes results changes the digest") {
  const std::string before = digest({});
  const auto differs = [&before](auto change) {
    SegmentSettings settings;
    change(settings);
    return digest(settings) != before;
  };
  CHECK(differs([](auto& s) { s.classes = 3; }));
  CHECK(differs([](auto& s) { s.classes = kAutoClasses; }));
  CHECK(differs([](auto& s) { s.connectivity = Connectivity::kEight; }));
  CHECK(differs([](auto& s) { s.coupling.mode = CouplingMode::kSampled; }));
  CHECK(differs([](auto& s) { s.shared_variance = true; }));
  CHECK(differs([](auto& s) {
    s.blur.mode = s.blur.mode == BlurMode::kAuto ? BlurMode::kNone : BlurMode::kAuto;
  }));
  CHECK(differs([](auto& s) { s.blur = {BlurMode::kGiven, 0.8}; }));
  CHECK(differs([](auto& s) { s.shading.mode = ShadingMode::kAuto; }));
  CHECK(differs([](auto& s) { s.shading = {ShadingMode::kGiven, 8}; }));
  CHECK(differs([](auto& s) { s.light.flat_field = "flat.tif"; }));
  CHECK(differs([](auto& s) { s.light.background = "dark.tif"; }));
  CHECK(differs([](auto& s) { s.chains = 5; }));
  CHECK(differs([](auto& s) { s.seed = 2; }));
  CHECK(differs([](auto& s) { s.schedule.sweeps_a_block = 8; }));
  CHECK(differs([](auto& s) { s.schedule.first_part = 192; }));
  CHECK(differs([](auto& s) { s.schedule.first_window = 192; }));
  CHECK(differs([](auto& s) { s.schedule.max_sweeps = 9000; }));
  CHECK(differs([](auto& s) { s.target.max_rhat = 1.02; }));
  CHECK(differs([](auto& s) { s.target.min_ess = 100; }));
  CHECK(differs([](auto& s) { s.target.max_probability_mcse = 0.02; }));
  CHECK(differs([](auto& s) { s.particles.min_area = 1; }));
  CHECK(differs([](auto& s) { s.particles.connectivity = 4; }));
  CHECK(differs([](auto& s) { s.pixel_size_um = 0.5; }));
  CHECK(differs([](auto& s) { s.mask = "m.png"; }));
}

TEST_CASE("two given couplings differ; the value means nothing in other modes") {
  SegmentSettings a;
  SegmentSettings b;
  b.coupling.value = 0.5;
  CHECK(digest(a) == digest(b));
  a.coupling = {CouplingMode::kFixed, 0.7};
  b.coupling = {CouplingMode::kFixed, 0.8};
  CHECK(digest(a) != digest(b));
}

TEST_CASE("another content of a mask changes the digest") {
  SegmentSettings a;
  a.mask = "m.png";
  a.mask_sha256 = std::string(64, '1');
  SegmentSettings b = a;
  b.mask_sha256 = std::string(64, '2');
  CHECK(digest(a) != digest(b));
}
