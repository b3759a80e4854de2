#include "model/search_image.h"

#include <algorithm>
#include <cmath>
#include <vector>

namespace stillfield {
namespace {

// Where the pixels of one axis come from; -1 between tiles.
std::vector<int> source_of_axis(int size, bool tiled) {
  std::vector<int> source;
  if (!tiled || size <= kSearchTiles * kSearchTile) {
    for (int i = 0; i < size; ++i) source.push_back(i);
    return source;
  }
  for (int t = 0; t < kSearchTiles; ++t) {
    if (t > 0) source.push_back(-1);
    const int first = static_cast<int>(std::int64_t{size - kSearchTile} * t / (kSearchTiles - 1));
    for (int i = 0; i < kSearchTile; ++i) source.push_back(first + i);
  }
  return source;
}

int quantile_level(const GreyLevels& grey, double share) {
  const double wanted = share * static_cast<double>(grey.observed);
  double below = 0.0;
  int l = 0;
  while (l + 1 < grey.levels &&
         (below += static_cast<double>(grey.histogram[static_cast<std::size_t>(l)])) < wanted) {
    ++l;
  }
  return l;
}

// New level of each old one; sets origin, step and number of levels of `out`.
std::vector<std::uint16_t> coarser_levels(const GreyLevels& grey, GreyLevels& out) {
  double first = 0.0, width = 1.0;
  out.levels = grey.levels;
  if (grey.levels > kSearchLevels) {
    const double low = quantile_level(grey, 0.001), high = quantile_level(grey, 0.999);
    const double margin = std::max(0.5 * (high - low), 0.5 * kSearchLevels);
    first = std::max(0.0, low - margin);
    width = (std::min(grey.levels - 1.0, high + margin) - first) / (kSearchLevels - 1);
    out.levels = kSearchLevels;
  }
  out.origin = grey.value(0) + grey.step * first;
  out.step = grey.step * width;
  std::vector<std::uint16_t> level(static_cast<std::size_t>(grey.levels) + 1);
  for (int l = 0; l < grey.levels; ++l) {
    level[static_cast<std::size_t>(l)] =
        static_cast<std::uint16_t>(std::clamp((l - first) / width + 0.5, 0.0, out.levels - 1.0));
  }
  level.back() = out.missing();
  return level;
}

}  // namespace

GreyLevels make_search_image(const GreyLevels& grey) {
  GreyLevels out;
  const std::vector<std::uint16_t> level = coarser_levels(grey, out);
  const Extent e = grey.level.extent();
  const bool tiled =
      e.sites() > std::int64_t{kSearchTiles * kSearchTiles} * kSearchTile * kSearchTile;
  const std::vector<int> from_x = source_of_axis(e.width, tiled);
  const std::vector<int> from_y = source_of_axis(e.height, tiled);
  out.level = Volume<std::uint16_t>(
      {static_cast<int>(from_x.size()), static_cast<int>(from_y.size()), e.depth});
  out.histogram.assign(static_cast<std::size_t>(out.levels), 0);
  for (int z = 0; z < e.depth; ++z) {
    for (int y = 0; y < out.level.height(); ++y) {
      const int sy = from_y[static_cast<std::size_t>(y)];
      for (int x = 0; x < out.level.width(); ++x) {
        const int sx = from_x[static_cast<std::size_t>(x)];
        const bool seam = sx < 0 || sy < 0;
        const std::uint16_t l = seam ? out.missing() : level[grey.level.at(sx, sy, z)];
        out.level.at(x, y, z) = l;
        if (l == out.missing()) continue;
        ++out.histogram[l];
        ++out.observed;
      }
    }
  }
  return out;
}

}  // namespace stillfield
