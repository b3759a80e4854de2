#include "model/patch_settings.h"

#include <algorithm>
#include <string>

#include "core/error.h"

namespace stillfield {
namespace {

constexpr int kLeastSide = 16;
constexpr double kLargePatchNoise = 40.0 / 255.0;
constexpr std::int64_t kManyPixels = std::int64_t{512} * 512;

// The extremes of some thousand block means lie about this many deviations out.
constexpr double kExtremeDeviations = 3.5;
constexpr int kBlock = 4;

void check_settings(const PatchSettings& s) {
  if (s.patch != 0 && s.patch != 4 && s.patch != 6 && s.patch != 8) {
    throw Error(ErrorKind::kUsage, "the patch side must be 4, 6 or 8 pixels, not " +
                                       std::to_string(s.patch) + ": give one of these or 0");
  }
  const bool good = s.components >= 0 && s.components <= 200 && s.tiling_sweeps >= 1 &&
                    s.group_passes >= 0 && s.group_size >= 4 && s.group_size <= 200 &&
                    s.samples >= 0;
  if (!good) {
    throw Error(ErrorKind::kUsage,
                "the settings of the patch field are out of range: give 0 to 200 components, at "
                "least 1 tiling sweep, 4 to 200 patches a group");
  }
}

void check_plane(const PatchPlane& plane) {
  if (!(plane.noise_sd > 0.0)) {
    throw Error(ErrorKind::kInput,
                "the noise level of the patch field must be above 0: give a positive standard "
                "deviation");
  }
  const Volume<float>& v = *plane.value;
  if (std::min(v.width(), v.height()) < kLeastSide || v.depth() != 1) {
    throw Error(ErrorKind::kInput, "the image is smaller than " + std::to_string(kLeastSide) +
                                       " pixels on a side: use another prior than patches");
  }
}

}  // namespace

int least_patch_side() {
  return kLeastSide;
}

double relative_noise(const PatchPlane& plane) {
  const Volume<float>& v = *plane.value;
  double low = 0.0, high = 0.0;
  bool first = true;
  for (int y = 0; y + kBlock <= v.height(); y += kBlock) {
    for (int x = 0; x + kBlock <= v.width(); x += kBlock) {
      double sum = 0.0;
      for (int dy = 0; dy < kBlock; ++dy) {
        for (int dx = 0; dx < kBlock; ++dx) sum += double{v.at(x + dx, y + dy)};
      }
      const double mean = sum / (kBlock * kBlock);
      low = first ? mean : std::min(low, mean);
      high = first ? mean : std::max(high, mean);
      first = false;
    }
  }
  const double from_noise = 2.0 * kExtremeDeviations * plane.noise_sd / kBlock;
  return plane.noise_sd / std::max(high - low - from_noise, 1e-3 * plane.noise_sd);
}

PatchSettings resolved_settings(const PatchSettings& settings, std::span<const PatchPlane> planes) {
  check_settings(settings);
  check_noise_correlation(settings.noise_correlation);
  PatchSettings s = settings;
  std::int64_t pixels = 0;
  double noise = 0.0;
  for (const PatchPlane& plane : planes) {
    check_plane(plane);
    pixels += plane.value->extent().sites();
    if (s.patch == 0) noise = std::max(noise, relative_noise(plane));
  }
  if (s.patch == 0) s.patch = noise < kLargePatchNoise ? 6 : 8;
  if (s.components == 0) s.components = pixels > kManyPixels ? 40 : 30;
  s.group_size = s.group_size / 4 * 4;
  const int least = kLeastSide - s.patch + 1;  // positions along the least side
  s.group_size = std::min(s.group_size, least * least / 4 * 4);
  return s;
}

}  // namespace stillfield
