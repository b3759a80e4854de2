#include "diagnose/residual_block.h"

#include <algorithm>
#include <cmath>

#include "random/normal.h"

namespace stillfield {
namespace {

bool alike_around(View<const std::uint8_t> labels, int x, int y) {
  const std::uint8_t own = labels.at(x, y);
  for (int v = std::max(0, y - 1); v <= std::min(labels.height() - 1, y + 1); ++v) {
    const std::uint8_t* row = labels.row(v);
    for (int u = std::max(0, x - 1); u <= std::min(labels.width() - 1, x + 1); ++u) {
      if (row[u] != own) return false;
    }
  }
  return true;
}

double mean_at(const GaussianClasses& classes, std::size_t k, const Volume<float>* light, int x,
               int y) {
  return light ? classes.mean[k] * light->at(x, y) : classes.mean[k];
}

}  // namespace

std::vector<ResidualBlock> residual_blocks(const Extent& extent) {
  std::vector<ResidualBlock> all;
  for (int y = 0; y < extent.height; y += kResidualBlock) {
    for (int x = 0; x < extent.width; x += kResidualBlock) {
      ResidualBlock block;
      block.x = x;
      block.y = y;
      block.width = std::min(kResidualBlock, extent.width - x);
      block.height = std::min(kResidualBlock, extent.height - y);
      block.number = static_cast<std::uint32_t>(all.size());
      all.push_back(block);
    }
  }
  const auto n = static_cast<std::int64_t>(all.size());
  const std::int64_t most = kMostCheckedPixels / ResidualBlock::kPixels;
  if (n <= most) return all;
  std::vector<ResidualBlock> some;
  for (std::int64_t i = 0; i < most; ++i)
    some.push_back(all[static_cast<std::size_t>(i * n / most)]);
  return some;
}

void mark_labels(View<const std::uint8_t> labels, const GreyLevels& grey, ResidualBlock& block) {
  block.label.fill(0);
  block.inner.fill(0);
  for (int v = 0; v < block.height; ++v) {
    const int y = block.y + v;
    for (int u = 0; u < block.width; ++u) {
      const int x = block.x + u;
      if (grey.level.at(x, y) == grey.missing()) continue;
      const auto i = static_cast<std::size_t>(v * kResidualBlock + u);
      block.label[i] = labels.at(x, y);
      block.inner[i] = alike_around(labels, x, y) ? labels.at(x, y) : std::uint8_t{0};
    }
  }
}

void observed_residuals(const GreyLevels& grey, const GaussianClasses& classes,
                        ResidualBlock& block, const Volume<float>* light) {
  for (int v = 0; v < block.height; ++v) {
    for (int u = 0; u < block.width; ++u) {
      const auto i = static_cast<std::size_t>(v * kResidualBlock + u);
      if (block.label[i] == 0) continue;
      const auto k = static_cast<std::size_t>(block.label[i] - 1);
      block.residual[i] =
          static_cast<float>((grey.value(grey.level.at(block.x + u, block.y + v)) -
                              mean_at(classes, k, light, block.x + u, block.y + v)) /
                             classes.sd[k]);
    }
  }
}

void replicated_residuals(const GreyLevels& grey, const GaussianClasses& classes, PhiloxKey key,
                          std::uint32_t draw, ResidualBlock& block, const Volume<float>* light) {
  const double last = grey.levels - 1;
  for (std::size_t i = 0; i < ResidualBlock::kPixels; i += 4) {
    const PhiloxCounter words = philox4x32({static_cast<std::uint32_t>(i / 4), block.number, draw,
                                            counter_word3(Purpose::kReplicate, 0, 0)},
                                           key);
    for (std::size_t j = i; j < i + 4; ++j) {
      if (block.label[j] == 0) continue;
      const auto k = static_cast<std::size_t>(block.label[j] - 1);
      const int at = static_cast<int>(j);
      const double mean =
          mean_at(classes, k, light, block.x + at % kResidualBlock, block.y + at / kResidualBlock);
      const double value = mean + classes.sd[k] * standard_normal(words[j - i]);
      const double level = std::floor((value - grey.origin) / grey.step + 0.5);
      block.residual[j] = static_cast<float>(
          (grey.origin + grey.step * std::clamp(level, 0.0, last) - mean) / classes.sd[k]);
    }
  }
}

}  // namespace stillfield
