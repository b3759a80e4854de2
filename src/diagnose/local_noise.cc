#include "diagnose/local_noise.h"

#include <algorithm>

namespace stillfield {

LocalNoise::LocalNoise(int classes) : cells_(static_cast<std::size_t>(classes) + 1) {}

void LocalNoise::add(const ResidualBlock& block) {
  std::fill(cells_.begin(), cells_.end(), Cell{});
  for (std::size_t i = 0; i < ResidualBlock::kPixels; ++i) {
    if (block.inner[i] == 0) continue;
    Cell& cell = cells_[block.inner[i]];
    ++cell.pixels;
    cell.sum += block.residual[i];
  }
  std::array<double, ResidualBlock::kPixels> centred;
  std::array<std::uint8_t, ResidualBlock::kPixels> in_cell;
  for (std::size_t i = 0; i < ResidualBlock::kPixels; ++i) {
    Cell& cell = cells_[block.inner[i]];
    in_cell[i] = cell.pixels >= kFewestCellPixels ? block.inner[i] : std::uint8_t{0};
    if (in_cell[i] == 0) continue;
    centred[i] = block.residual[i] - cell.sum / cell.pixels;
    cell.square += centred[i] * centred[i];
  }
  for (const Cell& cell : cells_) {
    if (cell.pixels < kFewestCellPixels) continue;
    const double variance = cell.square / (cell.pixels - 1);
    departure_ += cell.pixels * (variance - 1) * (variance - 1);
    pixels_ += cell.pixels;
    square_ += cell.square;
  }
  constexpr std::size_t kSide = kResidualBlock;
  for (std::size_t i = 0; i < ResidualBlock::kPixels; ++i) {
    if (in_cell[i] == 0) continue;
    if (i % kSide + 1 < kSide && in_cell[i + 1] == in_cell[i]) {
      product_x_ += centred[i] * centred[i + 1];
      pairs_x_ += 1;
    }
    if (i + kSide < ResidualBlock::kPixels && in_cell[i + kSide] == in_cell[i]) {
      product_y_ += centred[i] * centred[i + kSide];
      pairs_y_ += 1;
    }
  }
}

double LocalNoise::spread() const {
  return departure_ / pixels_;
}

double LocalNoise::correlation(double product, double pairs) const {
  return product / pairs / (square_ / pixels_);
}

}  // namespace stillfield
