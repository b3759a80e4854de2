#include "model/fill_missing.h"

#include <vector>

namespace stillfield {
namespace {

// Means over squares of 2^level pixels; a negative weight never occurs, 0 = nothing usable inside.
struct Level {
  int width = 0, height = 0;
  std::vector<float> mean, weight;

  std::size_t index(int x, int y) const {
    return static_cast<std::size_t>(y) * static_cast<std::size_t>(width) +
           static_cast<std::size_t>(x);
  }
};

Level empty_level(int width, int height) {
  const auto size = static_cast<std::size_t>(width) * static_cast<std::size_t>(height);
  return {width, height, std::vector<float>(size), std::vector<float>(size)};
}

Level halved(const Level& fine) {
  Level coarse = empty_level((fine.width + 1) / 2, (fine.height + 1) / 2);
  for (int y = 0; y < fine.height; ++y) {
    for (int x = 0; x < fine.width; ++x) {
      const std::size_t from = fine.index(x, y), to = coarse.index(x / 2, y / 2);
      coarse.mean[to] += fine.weight[from] * fine.mean[from];
      coarse.weight[to] += fine.weight[from];
    }
  }
  for (std::size_t i = 0; i < coarse.mean.size(); ++i) {
    if (coarse.weight[i] > 0) coarse.mean[i] /= coarse.weight[i];
  }
  return coarse;
}

}  // namespace

void fill_missing(View<const std::uint8_t> usable, View<float> image) {
  std::vector<Level> levels{empty_level(image.width(), image.height())};
  for (int y = 0; y < image.height(); ++y) {
    for (int x = 0; x < image.width(); ++x) {
      if (usable.at(x, y) == 0) continue;
      levels[0].mean[levels[0].index(x, y)] = image.at(x, y);
      levels[0].weight[levels[0].index(x, y)] = 1;
    }
  }
  while (levels.back().width > 1 || levels.back().height > 1) {
    levels.push_back(halved(levels.back()));
  }
  if (levels.back().weight[0] == 0) return;
  for (int y = 0; y < image.height(); ++y) {
    for (int x = 0; x < image.width(); ++x) {
      if (usable.at(x, y) != 0) continue;
      std::size_t l = 1;
      while (levels[l].weight[levels[l].index(x >> l, y >> l)] == 0) ++l;
      image.at(x, y) = levels[l].mean[levels[l].index(x >> l, y >> l)];
    }
  }
}

}  // namespace stillfield
