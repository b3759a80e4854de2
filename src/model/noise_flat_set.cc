#include "model/noise_flat_set.h"

#include <algorithm>
#include <array>
#include <cmath>

namespace stillfield {
namespace {

constexpr double kMostShare = 0.3;

// E0 at these shares for 20, 9 and 5 coefficients: P(chi^2_{m+2} <= q) / share with q the quantile
// of chi^2_m at the share.
constexpr std::array<double, 8> kShares = {0.05, 0.1, 0.15, 0.2, 0.3, 0.4, 0.5, 1.0};
constexpr std::array<double, 8> kFlat20 = {0.4638, 0.5245, 0.5671, 0.6016,
                                           0.6584, 0.7068, 0.7512, 1.0};
constexpr std::array<double, 8> kFlat9 = {0.2861, 0.3526, 0.4018, 0.4431,
                                          0.5137, 0.5763, 0.6354, 1.0};
constexpr std::array<double, 8> kFlat5 = {0.1574, 0.2176, 0.2655, 0.3076,
                                          0.3833, 0.4538, 0.523,  1.0};

double flat_energy(int block_size, double share) {
  const std::array<double, 8>& energy = block_size == 8   ? kFlat20
                                        : block_size == 6 ? kFlat9
                                                          : kFlat5;
  std::size_t i = 1;
  while (i + 1 < kShares.size() && share > kShares[i]) ++i;
  const double t = std::clamp((share - kShares[i - 1]) / (kShares[i] - kShares[i - 1]), 0.0, 1.0);
  return energy[i - 1] + t * (energy[i] - energy[i - 1]);
}

}  // namespace

FlatSet flat_set(View<const float> image, const NoiseBlocks& blocks,
                 std::span<const std::uint32_t> among, double share, std::size_t few) {
  const auto all = static_cast<double>(among.size());
  const double wanted = std::max(share * all, std::min(kMostShare * all, static_cast<double>(few)));
  const std::vector<std::uint32_t> chosen =
      flattest_blocks(blocks, among, static_cast<std::size_t>(wanted));
  FlatSet set;
  set.sums = sum_high_parts(image, blocks, chosen);
  set.variance = set.sums.variance();
  set.grey = set.sums.grey();
  double low = 0.0;  // under selection by all coefficients each has the same mean in pure noise
  for (const std::uint32_t i : chosen) low += blocks.bent[i];
  low /= static_cast<double>(chosen.size());
  if (low > 0.0) {
    set.flatness = low / std::max(set.variance, 1e-12 * low) /
                   flat_energy(blocks.size, static_cast<double>(chosen.size()) / all);
  }
  return set;
}

double tile_error(std::span<const FlatSet> sets, const std::function<double(int)>& statistic) {
  std::vector<double> values;
  for (int t = 0; t < kNoiseTiles; ++t) {
    const bool used = std::any_of(sets.begin(), sets.end(), [t](const FlatSet& s) {
      return s.sums.tile[static_cast<std::size_t>(t)].blocks > 0.0;
    });
    if (used) values.push_back(statistic(t));
  }
  return jackknife_error(values);
}

}  // namespace stillfield
