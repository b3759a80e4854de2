#include "job/prepared_plane.h"

#include <algorithm>
#include <cmath>
#include <vector>

#include "core/error.h"
#include "model/fill_missing.h"
#include "model/impulse_noise.h"
#include "model/noise_estimate.h"

namespace stillfield {
namespace {

// Beyond this share what is found is no impulses but the noise itself.
constexpr double kMostImpulseShare = 0.25;

constexpr int kCorrelationReach = 2;  // pixels

// Calls body(x, y) for every pixel.
template <class Body>
void for_each_pixel(const Extent& e, const Body& body) {
  for (int y = 0; y < e.height; ++y) {
    for (int x = 0; x < e.width; ++x) body(x, y);
  }
}

void sort_pixels(const Volume<float>& value, const Usable& allowed,
                 const std::optional<double>& saturation, PreparedPlane& plane) {
  plane.usable = Usable(value.extent());
  plane.saturated = Usable(value.extent());
  for_each_pixel(value.extent(), [&](int x, int y) {
    const float v = value.at(x, y);
    if (std::isnan(v) || allowed.at(x, y) == 0) {
      ++plane.missing;
    } else if (saturation && v >= *saturation) {
      ++plane.cut_off;
      plane.saturated.at(x, y) = 1;
    } else {
      ++plane.observed;
      plane.usable.at(x, y) = 1;
    }
  });
}

void check_values(const Volume<float>& value, const PreparedPlane& plane) {
  if (plane.observed == 0) {
    throw Error(ErrorKind::kInput,
                "there is no usable pixel: all are missing, masked or saturated; check the image, "
                "--mask and --saturation");
  }
  bool first = true, differs = false;
  float any = 0;
  for_each_pixel(value.extent(), [&](int x, int y) {
    if (plane.usable.at(x, y) == 0) return;
    if (first) any = value.at(x, y);
    first = false;
    differs = differs || value.at(x, y) != any;
  });
  if (!differs) {
    throw Error(ErrorKind::kInput,
                "every pixel has the same grey value, so there is no noise to remove; leave the "
                "image out or check how it was taken");
  }
}

double middle_grey(const Volume<float>& value, const Usable& usable) {
  std::vector<float> values;
  for_each_pixel(value.extent(), [&](int x, int y) {
    if (usable.at(x, y) != 0) values.push_back(value.at(x, y));
  });
  const auto middle = values.begin() + static_cast<std::ptrdiff_t>(values.size() / 2);
  std::nth_element(values.begin(), middle, values.end());
  return *middle;
}

void check_noise(const NoiseModel& noise) {
  if (noise.sd_at(noise.mid_grey) > 0) return;
  throw Error(ErrorKind::kInput,
              "no noise can be seen, so there is nothing to restore; give --noise if its level is "
              "known");
}

NoiseModel find_noise(const NoiseRequest& request, const Volume<float>& value, const Usable& usable,
                      const Pool& pool) {
  if (request.photon) {
    return given_photon_noise(request.photon->gain, request.photon->variance,
                              request.photon->offset, middle_grey(value, usable));
  }
  if (request.sd) {
    NoiseModel noise = *request.kind == NoiseKind::kRician ? given_rician_noise(*request.sd)
                                                           : given_gaussian_noise(*request.sd);
    noise.mid_grey = middle_grey(value, usable);
    return noise;
  }
  NoiseModel noise = estimate_noise(request.kind, value.view(), usable.view(), pool);
  check_noise(noise);
  return noise;
}

Usable without_impulses(const Usable& usable, const ImpulseMap& impulses) {
  Usable clean(usable.extent());
  for_each_pixel(usable.extent(), [&](int x, int y) {
    const bool impulse = impulses.share > 0 && impulses.found(x, y);
    clean.at(x, y) = usable.at(x, y) != 0 && !impulse ? 1 : 0;
  });
  return clean;
}

void transform_values(const Volume<float>& value, PreparedPlane& plane) {
  plane.transform = make_transform(plane.noise);
  plane.transformed = Volume<float>(value.extent());
  for_each_pixel(value.extent(), [&](int x, int y) {
    if (std::isnan(value.at(x, y))) return;
    plane.transformed.at(x, y) = static_cast<float>(plane.transform->forward(value.at(x, y)));
  });
}

// Impulses among the values as they are. Single counts of photons look like impulses, and after the
// transform common counts look like stuck values: of photon noise both views must agree.
void find_impulses(const Volume<float>& value, const DenoiseSettings& settings, const Pool& pool,
                   PreparedPlane& plane) {
  const bool told = settings.impulses == ImpulseMode::kShare;
  const auto expected = told ? std::optional(settings.impulse_share) : std::nullopt;
  const View<const std::uint8_t> usable = plane.usable.view();
  ImpulseMap& map = plane.impulses;
  map = detect_impulses(value.view(), usable, plane.noise, pool, expected);
  if (plane.noise.kind == NoiseKind::kPhoton && map.share > 0) {
    const ImpulseMap other =
        detect_impulses(plane.transformed.view(), usable,
                        given_gaussian_noise(plane.transform->sd()), pool, expected);
    std::int64_t found = 0;
    for_each_pixel(value.extent(), [&](int x, int y) {
      map.value.at(x, y) = std::min(map.value.at(x, y), other.value.at(x, y));
      found += map.found(x, y);
    });
    const double share = static_cast<double>(found) / static_cast<double>(plane.observed);
    map.share = std::max(map.share, other.share) > kMostImpulseShare ? 0.0 : share;
  }
  if (told) {
    map.share = settings.impulse_share;
  } else if (map.share < kLeastImpulseShare || map.share > kMostImpulseShare) {
    map = {};
  }
  plane.noise.impulse_share = map.share;
}

// Estimated without what looks like impulses; with all pixels when that is more than impulses can
// be.
NoiseModel noise_without_impulses(const NoiseRequest& request, const Volume<float>& value,
                                  const Usable& usable, const Pool& pool) {
  try {
    const NoiseModel noise =
        estimate_noise_and_impulses(request.kind, value.view(), usable.view(), pool).noise;
    if (noise.impulse_share <= kMostImpulseShare) {
      check_noise(noise);
      return noise;
    }
  } catch (const Error&) {
    // Too few pixels were left, or no noise in them: they were no impulses.
  }
  return find_noise(request, value, usable, pool);
}

// The noise, and the impulses that hide it.
void look_at_noise(const Volume<float>& value, const DenoiseSettings& settings, const Pool& pool,
                   PreparedPlane& plane) {
  const bool given = settings.noise.sd || settings.noise.photon;
  if (given || settings.impulses == ImpulseMode::kOff) {
    plane.noise = find_noise(settings.noise, value, plane.usable, pool);
  } else {
    plane.noise = noise_without_impulses(settings.noise, value, plane.usable, pool);
  }
  transform_values(value, plane);
  if (settings.impulses == ImpulseMode::kOff) return;
  const bool seen = plane.noise.impulse_share > 0;
  find_impulses(value, settings, pool, plane);
  if (given || !seen || plane.impulses.share > 0) return;
  // What looked like impulses was the noise itself: single counts of photons.
  plane.noise = find_noise(settings.noise, value, plane.usable, pool);
  transform_values(value, plane);
}

}  // namespace

PreparedPlane prepare_plane(const Volume<float>& value, const Usable& allowed,
                            const DenoiseSettings& settings, const Pool& pool) {
  PreparedPlane plane;
  sort_pixels(value, allowed, settings.saturation, plane);
  check_values(value, plane);
  look_at_noise(value, settings, pool, plane);
  plane.clean = without_impulses(plane.usable, plane.impulses);
  plane.start = Volume<float>(value.extent());
  for_each_pixel(value.extent(), [&](int x, int y) {
    if (plane.clean.at(x, y) != 0) plane.start.at(x, y) = plane.transformed.at(x, y);
  });
  plane.correlation =
      noise_correlation(plane.transformed.view(), plane.clean.view(), kCorrelationReach);
  fill_missing(plane.clean.view(), plane.start.view());
  return plane;
}

}  // namespace stillfield
