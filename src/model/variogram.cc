#include "model/variogram.h"

#include <algorithm>

namespace stillfield {
namespace {

constexpr std::int32_t kFar = 1 << 30;

// Distance of every pixel to the nearest usable one: two passes over rows and columns suffice for
// the larger of the two directions.
Volume<std::int32_t> distances(View<const std::uint8_t> usable) {
  const Extent e = usable.extent();
  Volume<std::int32_t> d(e);
  const auto relax = [&](int x, int y, int dx, int dy) {
    const int u = x + dx, v = y + dy;
    if (u < 0 || u >= e.width || v < 0 || v >= e.height) return;
    d.at(x, y) = std::min(d.at(x, y), d.at(u, v) + 1);
  };
  for (int y = 0; y < e.height; ++y) {
    for (int x = 0; x < e.width; ++x) {
      d.at(x, y) = usable.at(x, y) != 0 ? 0 : kFar;
      for (int dx = -1; dx <= 1; ++dx) relax(x, y, dx, -1);
      relax(x, y, -1, 0);
    }
  }
  for (int y = e.height - 1; y >= 0; --y) {
    for (int x = e.width - 1; x >= 0; --x) {
      for (int dx = -1; dx <= 1; ++dx) relax(x, y, dx, 1);
      relax(x, y, 1, 0);
    }
  }
  return d;
}

struct PairSum {
  double squares = 0;
  double pairs = 0;
};

PairSum pairs_at(View<const float> image, View<const std::uint8_t> usable, int dx, int dy) {
  PairSum sum;
  for (int y = 0; y + dy < image.height(); ++y) {
    double row = 0;
    for (int x = 0; x + dx < image.width(); ++x) {
      if (usable.at(x, y) == 0 || usable.at(x + dx, y + dy) == 0) continue;
      const double d = double{image.at(x, y)} - image.at(x + dx, y + dy);
      row += d * d;
      sum.pairs += 1;
    }
    sum.squares += row;
  }
  return sum;
}

}  // namespace

std::vector<double> mean_squared_differences(View<const float> image,
                                             View<const std::uint8_t> usable) {
  std::vector<double> d;
  for (int h = 1; h <= kVariogramReach; ++h) {
    const PairSum across = pairs_at(image, usable, h, 0);
    const PairSum down = pairs_at(image, usable, 0, h);
    const double pairs = across.pairs + down.pairs;
    const double last = d.empty() ? 0.0 : d.back();
    d.push_back(pairs > 0 ? (across.squares + down.squares) / pairs : last);
  }
  return d;
}

void add_gap_variance(View<const float> image, View<const std::uint8_t> usable,
                      View<float> variance) {
  const std::vector<double> differences = mean_squared_differences(image, usable);
  const Volume<std::int32_t> distance = distances(usable);
  for (int y = 0; y < image.height(); ++y) {
    for (int x = 0; x < image.width(); ++x) {
      const std::int32_t h = std::min(distance.at(x, y), kVariogramReach);
      if (h == 0) continue;
      const double gap = differences[static_cast<std::size_t>(h - 1)] / 2;
      variance.at(x, y) = static_cast<float>(variance.at(x, y) + gap);
    }
  }
}

}  // namespace stillfield
