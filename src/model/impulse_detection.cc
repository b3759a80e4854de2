#include "model/impulse_detection.h"

#include <algorithm>
#include <cmath>
#include <limits>
#include <vector>

#include "core/elementary.h"
#include "model/impulse_atoms.h"
#include "model/impulse_density.h"
#include "model/impulse_window.h"
#include "model/noise_quantile.h"

namespace stillfield {
namespace {

constexpr std::size_t kRank = 4;
constexpr double kNoise = 1.6, kTexture = 3.0, kOverall = 4.0;
constexpr double kOverallQuantile = 0.8;
constexpr int kRounds = 3;
constexpr double kBlur = 0.3;
constexpr double kOdd = 0.01;  // share of regular pixels that their neighbours do not explain

using Flags = Volume<std::uint8_t>;

// d of every usable pixel; fewer neighbours in play lower the rank in proportion.
void rank_differences(View<const float> image, View<const std::uint8_t> usable,
                      View<const std::uint8_t> in_play, const Pool& pool, View<float> out) {
  for_image_rows(image.extent(), pool, [&](int y, int z) {
    for (int x = 0; x < image.width(); ++x) {
      out.at(x, y, z) = 0.0f;
      if (usable.at(x, y, z) == 0) continue;
      ImpulseWindow w(image, in_play, x, y, z);
      if (w.size == 0) continue;
      for (std::size_t i = 0; i < w.size; ++i) {
        w.value[i] = std::fabs(w.value[i] - image.at(x, y, z));
      }
      const std::size_t rank = (kRank * w.size + kImpulseNeighbours / 2) / kImpulseNeighbours;
      out.at(x, y, z) = w.ranked(std::max<std::size_t>(rank, 1) - 1);
    }
  });
}

double overall_difference(View<const float> d, View<const std::uint8_t> in_play) {
  std::vector<double> values;
  for (int z = 0; z < d.depth(); ++z) {
    for (int y = 0; y < d.height(); ++y) {
      for (int x = 0; x < d.width(); ++x) {
        if (in_play.at(x, y, z) != 0) values.push_back(d.at(x, y, z));
      }
    }
  }
  return values.empty() ? 0.0 : sample_quantile(std::move(values), kOverallQuantile);
}

void keep_regular(View<const std::uint8_t> usable, const ImpulseMap& map, const Pool& pool,
                  Flags& in_play) {
  for_image_rows(in_play.extent(), pool, [&](int y, int z) {
    for (int x = 0; x < in_play.width(); ++x) {
      in_play.at(x, y, z) = usable.at(x, y, z) != 0 && !map.found(x, y, z);
    }
  });
}

struct MapTotals {
  double usable = 0.0, found = 0.0, value = 0.0;
};

MapTotals totals_of(View<const std::uint8_t> usable, const ImpulseMap& map) {
  MapTotals t;
  for (int z = 0; z < usable.depth(); ++z) {
    for (int y = 0; y < usable.height(); ++y) {
      for (int x = 0; x < usable.width(); ++x) {
        t.usable += usable.at(x, y, z) != 0 ? 1.0 : 0.0;
        t.found += map.found(x, y, z) ? 1.0 : 0.0;
        t.value += map.value.at(x, y, z);
      }
    }
  }
  return t;
}

double share_of(View<const std::uint8_t> usable, const ImpulseMap& map) {
  const MapTotals t = totals_of(usable, map);
  return t.usable > 0.0 ? t.found / t.usable : 0.0;
}

// Sum and number of the regular pixels of a 3 x 3 window.
struct Around {
  float sum = 0.0f;
  float count = 0.0f;
};

Volume<Around> sums_around(View<const float> image, View<const std::uint8_t> in_play,
                           const Pool& pool) {
  Volume<Around> sums(image.extent());
  for_image_rows(image.extent(), pool, [&](int y, int z) {
    for (int x = 0; x < image.width(); ++x) {
      Around& a = sums.at(x, y, z);
      for (int v = std::max(y - 1, 0); v <= std::min(y + 1, image.height() - 1); ++v) {
        for (int u = std::max(x - 1, 0); u <= std::min(x + 1, image.width() - 1); ++u) {
          if (in_play.at(u, v, z) == 0) continue;
          a.sum += image.at(u, v, z);
          a.count += 1.0f;
        }
      }
    }
  });
  return sums;
}

// f(y) at one pixel; 0 when no regular pixel is near.
double neighbour_density(View<const float> image, View<const std::uint8_t> in_play,
                         const Volume<Around>& sums, const NoiseModel& noise, double least_noise,
                         double texture, int x, int y, int z) {
  constexpr double kRootTwoPi = 2.5066282746310002;
  const double grey = image.at(x, y, z);
  double density = 0.0, terms = 0.0;
  for (int v = std::max(y - kImpulseRadius, 0);
       v <= std::min(y + kImpulseRadius, image.height() - 1); ++v) {
    for (int u = std::max(x - kImpulseRadius, 0);
         u <= std::min(x + kImpulseRadius, image.width() - 1); ++u) {
      Around a = sums.at(u, v, z);
      if (in_play.at(x, y, z) != 0 && std::abs(u - x) <= 1 && std::abs(v - y) <= 1) {
        a.sum -= image.at(x, y, z);
        a.count -= 1.0f;
      }
      if (a.count < 1.0f) continue;
      const double mean = a.sum / a.count;
      const double sd = std::max(noise.sd_at(mean), least_noise);
      const double variance = sd * sd * (1.0 + 1.0 / a.count + kBlur * kBlur) + texture * texture;
      terms += 1.0;
      if (!(variance > 0.0)) continue;
      density += exact_exp(-0.5 * (grey - mean) * (grey - mean) / variance) /
                 (kRootTwoPi * std::sqrt(variance));
    }
  }
  return terms > 0.0 ? density / terms : 0.0;
}

// The limit on d / limit above which the expected share of the pixels lies; at most 1.
float cut_for_share(const Volume<float>& excess, View<const std::uint8_t> usable, double share) {
  std::vector<double> values;
  for (int z = 0; z < excess.depth(); ++z) {
    for (int y = 0; y < excess.height(); ++y) {
      for (int x = 0; x < excess.width(); ++x) {
        if (usable.at(x, y, z) != 0) values.push_back(excess.at(x, y, z));
      }
    }
  }
  if (values.empty()) return 1.0f;
  return std::min(1.0f, static_cast<float>(sample_quantile(std::move(values), 1.0 - share)));
}

}  // namespace

ImpulseMap isolated_pixels(View<const float> image, View<const std::uint8_t> usable,
                           const NoiseModel& noise, const Pool& pool,
                           std::optional<double> expected_share) {
  const Extent e = image.extent();
  ImpulseMap map{Volume<float>(e)};
  Volume<float> difference(e), excess(e);
  Flags in_play(e);
  const View<float> d = difference.view();
  const ImpulseAtoms atoms = find_atoms(image, usable);
  for (int round = 0; round < kRounds; ++round) {
    keep_regular(usable, map, pool, in_play);
    rank_differences(image, usable, in_play.view(), pool, d);
    const double overall = overall_difference(d, in_play.view());
    for_image_rows(e, pool, [&](int y, int z) {
      for (int x = 0; x < e.width; ++x) {
        if (usable.at(x, y, z) == 0) continue;
        ImpulseWindow grey(image, in_play.view(), x, y, z);
        ImpulseWindow texture(d, in_play.view(), x, y, z);
        if (grey.size == 0) continue;
        const double sd = std::max(noise.sd_at(grey.ranked(grey.size / 2)), atoms.least_noise());
        const double t = texture.ranked(3 * texture.size / 4);
        const double limit = atoms.certainty(image.at(x, y, z)) > 0.0
                                 ? kNoise * sd + t
                                 : kNoise * sd + kTexture * t + kOverall * overall;
        excess.at(x, y, z) = static_cast<float>(d.at(x, y, z) / limit);
      }
    });
    const float cut = expected_share ? cut_for_share(excess, usable, *expected_share) : 1.0f;
    for_image_rows(e, pool, [&](int y, int z) {
      for (int x = 0; x < e.width; ++x) {
        map.value.at(x, y, z) = excess.at(x, y, z) > cut ? 1.0f : 0.0f;
      }
    });
  }
  map.share = share_of(usable, map);
  return map;
}

ImpulseMap detect_impulses(View<const float> image, View<const std::uint8_t> usable,
                           const NoiseModel& noise, const Pool& pool,
                           std::optional<double> expected_share) {
  const Extent e = image.extent();
  ImpulseMap map = isolated_pixels(image, usable, noise, pool, expected_share);
  if (map.share < kLeastImpulseShare) return map;
  const ImpulseAtoms atoms = find_atoms(image, usable);
  Flags in_play(e);
  Volume<float> difference(e);
  const View<float> d = difference.view();
  for (int round = 0; round < kRounds; ++round) {
    const ImpulseDensity impulse(image, usable, map);
    const MapTotals t = totals_of(usable, map);
    const double share = expected_share.value_or(t.value / t.usable);
    keep_regular(usable, map, pool, in_play);
    rank_differences(image, usable, in_play.view(), pool, d);
    const Volume<Around> sums = sums_around(image, in_play.view(), pool);
    for_image_rows(e, pool, [&](int y, int z) {
      for (int x = 0; x < e.width; ++x) {
        if (usable.at(x, y, z) == 0) continue;
        ImpulseWindow window(d, in_play.view(), x, y, z);
        const double texture = window.size > 0 ? window.ranked(window.size / 2) : 0.0;
        const double hit = share * impulse(image.at(x, y, z));
        const double regular =
            (1.0 - share) * ((1.0 - kOdd) * neighbour_density(image, in_play.view(), sums, noise,
                                                              kLeastShareOfRange * impulse.range(),
                                                              texture, x, y, z) +
                             kOdd / impulse.range());
        const double value = hit + regular > 0.0 ? hit / (hit + regular) : 1.0;
        map.value.at(x, y, z) =
            static_cast<float>(std::max(value, atoms.certainty(image.at(x, y, z))));
      }
    });
  }
  map.share = share_of(usable, map);
  return map;
}

}  // namespace stillfield
