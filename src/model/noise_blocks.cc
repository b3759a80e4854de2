#include "model/noise_blocks.h"

#include <algorithm>
#include <cmath>
#include <utility>

#include "core/error.h"
#include "model/noise_quantile.h"

namespace stillfield {
namespace {

constexpr int kMostSize = 8;
constexpr double kLeastShare = 0.04;  // of the pixels, must start a block

struct Split {
  int size, low_limit, high_limit;
};
constexpr std::array<Split, 4> kSplits = {{{8, 5, 9}, {6, 3, 7}, {5, 2, 6}, {4, 2, 5}}};

// cos(pi m / (2 p)) from its Taylor series on [0, pi / 4] and symmetry: the C library's cosine
// differs between CPUs.
double cosine(int m, int p) {
  constexpr double kPi = 3.14159265358979323846;
  m %= 4 * p;
  if (m > 2 * p) m = 4 * p - m;
  if (m > p) return -cosine(2 * p - m, p);
  const double x = kPi * m / (2.0 * p);
  double term = 1.0;
  double sum = 1.0;
  for (int k = 1; k < 15; ++k) {
    term *= -x * x / (2.0 * k * (2.0 * k - 1.0));
    sum += term;
  }
  return sum;
}

// Rows of the orthonormal DCT-II matrix.
class CosineBasis {
 public:
  explicit CosineBasis(const Split& split) : split_(split) {
    const int p = split.size;
    for (int i = 0; i < p; ++i) {
      const double scale = std::sqrt((i == 0 ? 1.0 : 2.0) / p);
      for (int k = 0; k < p; ++k) value_[i][k] = scale * cosine((2 * k + 1) * i, p);
      for (int j = 0; j < p; ++j) {
        if (i + j > 0 && i + j <= split.low_limit) low_.emplace_back(i, j);
        if (i + j >= split.high_limit) high_.emplace_back(i, j);
      }
    }
  }
  const Split& split() const { return split_; }
  int size() const { return split_.size; }
  double at(int i, int k) const { return value_[i][k]; }
  const std::vector<std::pair<int, int>>& low() const { return low_; }
  const std::vector<std::pair<int, int>>& high() const { return high_; }

 private:
  Split split_;
  double value_[kMostSize][kMostSize] = {};
  std::vector<std::pair<int, int>> low_, high_;
};

const Split& split_of_size(int size) {
  return *std::find_if(kSplits.begin(), kSplits.end(),
                       [size](const Split& s) { return s.size == size; });
}

// Energies and means of one row of block positions.
class BlockRow {
 public:
  BlockRow(const CosineBasis& basis, View<const float> image, View<const std::uint8_t> usable)
      : basis_(basis), image_(image), usable_(usable), columns_(image.width() - basis.size() + 1) {}

  void find(int y, int z, NoiseBlocks& out) {
    const int p = basis_.size();
    const auto n = static_cast<std::size_t>(columns_);
    // Bad pixels under each block of the row.
    std::vector<int> bad(n);
    for (int r = 0; r < p; ++r) {
      const std::uint8_t* u = usable_.row(y + r, z);
      for (int x = 0; x < columns_; ++x) {
        for (int k = 0; k < p; ++k) bad[static_cast<std::size_t>(x)] += u[x + k] == 0;
      }
    }
    if (std::all_of(bad.begin(), bad.end(), [](int b) { return b > 0; })) return;
    transform_rows(y, z, bad);
    std::vector<double> low(n), slope(n), mean(n), part(n);
    for (const auto& [i, j] : basis_.low()) {
      transform_column(i, j, part);
      std::vector<double>& sum = i + j == 1 ? slope : low;
      for (std::size_t x = 0; x < n; ++x) sum[x] += part[x] * part[x];
    }
    transform_column(0, 0, mean);
    const auto parts = static_cast<double>(basis_.low().size());
    for (int x = 0; x < columns_; ++x) {
      const auto k = static_cast<std::size_t>(x);
      if (bad[k] > 0) continue;
      out.place.push_back({x, y, z});
      out.mean.push_back(mean[k] / p);
      out.low.push_back((low[k] + slope[k]) / parts);
      out.bent.push_back(low[k] / (parts - 2.0));
    }
  }

 private:
  // row_[r][j][x]: coefficient j of the p pixels of row y + r from column x on.
  void transform_rows(int y, int z, const std::vector<int>& bad) {
    const int p = basis_.size();
    const int degrees = basis_.split().low_limit + 1;
    for (int r = 0; r < p; ++r) {
      const float* in = image_.row(y + r, z);
      for (int j = 0; j < degrees; ++j) {
        std::vector<double>& out = row_[r][j];
        out.assign(static_cast<std::size_t>(columns_), 0.0);
        for (int k = 0; k < p; ++k) {
          const double b = basis_.at(j, k);
          for (int x = 0; x < columns_; ++x) out[static_cast<std::size_t>(x)] += b * in[x + k];
        }
        // Unusable pixels may hold anything, even NaN; their blocks are not read.
        for (int x = 0; x < columns_; ++x) {
          if (bad[static_cast<std::size_t>(x)] > 0) out[static_cast<std::size_t>(x)] = 0.0;
        }
      }
    }
  }

  void transform_column(int i, int j, std::vector<double>& out) const {
    std::fill(out.begin(), out.end(), 0.0);
    for (int r = 0; r < basis_.size(); ++r) {
      const double b = basis_.at(i, r);
      const std::vector<double>& in = row_[r][j];
      for (std::size_t x = 0; x < out.size(); ++x) out[x] += b * in[x];
    }
  }

  const CosineBasis& basis_;
  View<const float> image_;
  View<const std::uint8_t> usable_;
  int columns_;
  std::vector<double> row_[kMostSize][kMostSize];
};

NoiseBlocks blocks_of_size(const Split& split, View<const float> image,
                           View<const std::uint8_t> usable, int row_step, const Pool& pool) {
  NoiseBlocks all;
  all.size = split.size;
  const CosineBasis basis(split);
  all.high_parts = static_cast<int>(basis.high().size());
  if (image.width() < split.size || image.height() < split.size) return all;
  const int rows = (image.height() - split.size) / row_step + 1;
  std::vector<NoiseBlocks> part(static_cast<std::size_t>(rows * image.depth()));
  pool.for_each(rows * image.depth(), [&](int i) {
    BlockRow(basis, image, usable)
        .find(i % rows * row_step, i / rows, part[static_cast<std::size_t>(i)]);
  });
  for (const NoiseBlocks& b : part) {
    all.place.insert(all.place.end(), b.place.begin(), b.place.end());
    all.mean.insert(all.mean.end(), b.mean.begin(), b.mean.end());
    all.low.insert(all.low.end(), b.low.begin(), b.low.end());
    all.bent.insert(all.bent.end(), b.bent.begin(), b.bent.end());
  }
  return all;
}

}  // namespace

NoiseBlocks find_noise_blocks(View<const float> image, View<const std::uint8_t> usable,
                              const Pool& pool) {
  const std::int64_t sites = image.extent().sites();
  const auto row_step = static_cast<int>((sites + kMostSites - 1) / kMostSites);
  for (const Split& split : kSplits) {
    NoiseBlocks blocks = blocks_of_size(split, image, usable, row_step, pool);
    const bool last = split.size == kSplits.back().size;
    const double enough =
        std::max(kLeastShare * static_cast<double>(sites) / row_step, kFewestBlocks + 0.0);
    if (static_cast<double>(blocks.place.size()) >= enough ||
        (last && static_cast<int>(blocks.place.size()) >= kFewestBlocks)) {
      return blocks;
    }
  }
  throw Error(ErrorKind::kInput,
              "too few usable pixels lie side by side to estimate the noise level; give it");
}

HighSums sum_high_parts(View<const float> image, const NoiseBlocks& blocks,
                        std::span<const std::uint32_t> chosen) {
  const CosineBasis basis(split_of_size(blocks.size));
  const int p = blocks.size;
  HighSums sums;
  sums.high_parts = blocks.high_parts;
  double row[kMostSize][kMostSize];
  for (const std::uint32_t at : chosen) {
    const BlockPlace& place = blocks.place[at];
    HighSums::Tile& tile =
        sums.tile[static_cast<std::size_t>(std::int64_t{place.y} * 8 / image.height() * 8 +
                                           std::int64_t{place.x} * 8 / image.width())];
    for (int r = 0; r < p; ++r) {
      const float* in = image.row(place.y + r, place.z) + place.x;
      for (int j = 0; j < p; ++j) {
        double sum = 0.0;
        for (int k = 0; k < p; ++k) sum += basis.at(j, k) * in[k];
        row[r][j] = sum;
      }
    }
    std::size_t c = 0;
    for (const auto& [i, j] : basis.high()) {
      double sum = 0.0;
      for (int r = 0; r < p; ++r) sum += basis.at(i, r) * row[r][j];
      tile.square[c++] += sum * sum;
    }
    tile.blocks += 1.0;
    tile.mean += blocks.mean[at];
  }
  return sums;
}

double HighSums::variance(int left_out) const {
  std::array<double, kMostHighParts> total{};
  double n = 0.0;
  for (int t = 0; t < kNoiseTiles; ++t) {
    if (t == left_out) continue;
    const Tile& from = tile[static_cast<std::size_t>(t)];
    n += from.blocks;
    for (std::size_t c = 0; c < total.size(); ++c) total[c] += from.square[c];
  }
  return n > 0.0 ? sample_median({total.begin(), total.begin() + high_parts}) / n : 0.0;
}

double HighSums::grey(int left_out) const {
  double sum = 0.0, n = 0.0;
  for (int t = 0; t < kNoiseTiles; ++t) {
    if (t == left_out) continue;
    n += tile[static_cast<std::size_t>(t)].blocks;
    sum += tile[static_cast<std::size_t>(t)].mean;
  }
  return n > 0.0 ? sum / n : 0.0;
}

std::vector<std::uint32_t> flattest_blocks(const NoiseBlocks& blocks,
                                           std::span<const std::uint32_t> among,
                                           std::size_t count) {
  std::vector<double> low;
  low.reserve(among.size());
  for (const std::uint32_t i : among) low.push_back(blocks.low[i]);
  count = std::clamp<std::size_t>(count, 1, low.size());
  const auto limit = low.begin() + static_cast<std::ptrdiff_t>(count - 1);
  std::nth_element(low.begin(), limit, low.end());
  std::vector<std::uint32_t> chosen;
  for (const std::uint32_t i : among) {
    if (blocks.low[i] <= *limit) chosen.push_back(i);
  }
  std::sort(chosen.begin(), chosen.end());
  return chosen;
}

double jackknife_error(std::span<const double> left_out_values) {
  double n = 0.0, sum = 0.0, square = 0.0;
  for (const double v : left_out_values) {
    if (v == v) n += 1.0, sum += v;
  }
  if (n < 2.0) return 0.0;
  for (const double v : left_out_values) {
    if (v == v) square += (v - sum / n) * (v - sum / n);
  }
  return std::sqrt(square * (n - 1.0) / n);
}

}  // namespace stillfield
