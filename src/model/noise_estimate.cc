#include "model/noise_estimate.h"

#include <algorithm>
#include <cmath>
#include <numeric>
#include <span>
#include <string>
#include <utility>
#include <vector>

#include "model/noise_blocks.h"
#include "model/noise_flat_set.h"
#include "model/noise_line.h"
#include "model/noise_quantile.h"
#include "model/noise_rician.h"

namespace stillfield {
namespace {

constexpr double kNormal95 = 1.6448536269514722;  // 95 % point of the standard normal
constexpr double kBinShare = 0.15;                // flattest blocks of an intensity bin
constexpr std::size_t kFewChosen = 1500;          // wanted even where few blocks are usable
constexpr std::size_t kFewChosenInBin = 100;

// Shares of the blocks to try; the largest whose blocks are still flat enough is taken.
constexpr double kFlatShares[] = {kFlatShare, 0.1, 0.15, 0.2, 0.3, 0.4, 0.5};
constexpr double kFlatEnough = 1.25;

const char* const kTextureWarning =
    "fine texture covers the whole picture, so the noise level may be estimated too high; give it "
    "if it is known";

std::vector<std::uint32_t> all_blocks(const NoiseBlocks& blocks) {
  std::vector<std::uint32_t> all(blocks.place.size());
  std::iota(all.begin(), all.end(), 0u);
  return all;
}

void set_interval(double sd, double error, double flatness, double limit, NoiseModel& model) {
  // Measured on photographs: the estimate exceeds the truth by at most this share.
  const double texture = 0.21 * std::max(flatness - 1.8, 0.0);
  model.lower90 = std::max(sd - kNormal95 * error, 0.0) / (1.0 + texture);
  model.upper90 = sd + kNormal95 * error;
  if (flatness > limit) model.warning = kTextureWarning;
}

NoiseModel gaussian(View<const float> image, const NoiseBlocks& blocks) {
  const std::vector<std::uint32_t> all = all_blocks(blocks);
  FlatSet set = flat_set(image, blocks, all, kFlatShares[0], kFewChosen);
  for (const double share : kFlatShares) {
    if (share == kFlatShares[0]) continue;
    FlatSet larger = flat_set(image, blocks, all, share, kFewChosen);
    if (larger.flatness > kFlatEnough) break;
    set = std::move(larger);
  }
  NoiseModel model;
  model.estimated = true;
  model.mid_grey = sample_median(blocks.mean);
  model.sd = std::sqrt(set.variance);
  const double error = tile_error(std::span<const FlatSet>(&set, 1),
                                  [&](int t) { return std::sqrt(set.sums.variance(t)); });
  set_interval(model.sd, error, set.flatness, kTextured, model);
  if (model.sd == 0.0) {
    model.warning = "no noise was found: the flattest parts of the picture are constant";
  }
  return model;
}

std::vector<FlatSet> intensity_bins(View<const float> image, const NoiseBlocks& blocks) {
  std::vector<std::uint32_t> order = all_blocks(blocks);
  std::stable_sort(order.begin(), order.end(), [&](std::uint32_t a, std::uint32_t b) {
    return blocks.mean[a] < blocks.mean[b];
  });
  std::vector<FlatSet> bins;
  for (std::size_t i = 0; i < kIntensityBins; ++i) {
    const std::size_t first = order.size() * i / kIntensityBins;
    const std::size_t last = order.size() * (i + 1) / kIntensityBins;
    if (first == last) continue;
    const std::span<const std::uint32_t> among(order.data() + first, last - first);
    bins.push_back(flat_set(image, blocks, among, kBinShare, kFewChosenInBin));
  }
  return bins;
}

NoiseLine line_without(const std::vector<FlatSet>& bins, int tile, bool through_origin) {
  NoisePoints points;
  for (const FlatSet& bin : bins) {
    points.grey.push_back(bin.sums.grey(tile));
    points.variance.push_back(bin.sums.variance(tile));
    points.flatness.push_back(bin.flatness);
    // A bin that lies in the left-out tile alone says nothing.
    if (points.variance.back() == 0.0 && bin.variance > 0.0) {
      points.grey.pop_back();
      points.variance.pop_back();
      points.flatness.pop_back();
    }
  }
  return points.grey.empty() ? NoiseLine{} : fit_noise_line(points, through_origin);
}

double median_flatness(const std::vector<FlatSet>& bins) {
  std::vector<double> flatness;
  for (const FlatSet& bin : bins) flatness.push_back(bin.flatness);
  return sample_median(flatness);
}

struct PhotonFit {
  NoiseModel model;
  bool clear = false;  // the variance plainly rises with the grey value
};

PhotonFit photon(View<const float> image, const NoiseBlocks& blocks) {
  const std::vector<FlatSet> bins = intensity_bins(image, blocks);
  NoiseLine line = line_without(bins, -1, false);
  const double slope_error =
      tile_error(bins, [&](int t) { return line_without(bins, t, false).slope; });
  const double intercept_error =
      tile_error(bins, [&](int t) { return line_without(bins, t, false).intercept; });
  const bool at_origin = line.intercept < 0.0 && line.intercept > -2.0 * intercept_error;
  if (at_origin) line = line_without(bins, -1, true);
  PhotonFit fit;
  NoiseModel& model = fit.model;
  model.kind = NoiseKind::kPhoton;
  model.estimated = true;
  model.mid_grey = sample_median(blocks.mean);
  model.gain = line.slope;
  model.variance = std::max(line.intercept, 0.0);
  if (line.intercept < 0.0 && line.slope > 0.0) model.offset = -line.intercept / line.slope;
  const double low = std::max(line.at(sample_quantile(blocks.mean, 0.05)), 0.0);
  const double high = line.at(sample_quantile(blocks.mean, 0.95));
  fit.clear = line.slope > kClearSlope * slope_error && high > kClearRatio * low;
  const double mid = model.mid_grey;
  const double error = tile_error(bins, [&](int t) {
    return std::sqrt(std::max(line_without(bins, t, at_origin).at(mid), 0.0));
  });
  set_interval(model.sd_at(mid), error, median_flatness(bins), kTexturedBins, model);
  model.warning += std::string(model.warning.empty() ? "" : "; ") +
                   "the read noise alone cannot be told from one image, only the noise at the grey "
                   "values that occur; measure it with dark and flat frames of the camera";
  return fit;
}

NoiseModel rician(View<const float> image, const NoiseBlocks& blocks) {
  const std::vector<FlatSet> bins = intensity_bins(image, blocks);
  const auto sd_without = [&](int tile) {
    std::vector<double> sd;
    for (const FlatSet& bin : bins) {
      const double variance = bin.sums.variance(tile);
      if (variance <= 0.0) continue;
      const double s = rician_signal(bin.sums.grey(tile) / std::sqrt(variance));
      sd.push_back(std::sqrt(variance / rician_variance(s)));
    }
    return sd.empty() ? 0.0 : sample_median(sd);
  };
  NoiseModel model;
  model.kind = NoiseKind::kRician;
  model.estimated = true;
  model.mid_grey = sample_median(blocks.mean);
  model.sd = sd_without(-1);
  set_interval(model.sd, tile_error(bins, sd_without), median_flatness(bins), kTexturedBins, model);
  return model;
}

}  // namespace

NoiseModel estimate_noise(std::optional<NoiseKind> kind, View<const float> image,
                          View<const std::uint8_t> usable, const Pool& pool) {
  const NoiseBlocks blocks = find_noise_blocks(image, usable, pool);
  if (kind == NoiseKind::kGaussian) return gaussian(image, blocks);
  if (kind == NoiseKind::kRician) return rician(image, blocks);
  const PhotonFit fit = photon(image, blocks);
  if (kind == NoiseKind::kPhoton && fit.model.gain > 0.0) return fit.model;
  if (!kind && fit.clear) return fit.model;
  NoiseModel model = gaussian(image, blocks);
  if (kind == NoiseKind::kPhoton) {
    model.warning += std::string(model.warning.empty() ? "" : "; ") +
                     "the noise does not rise with the grey value and is taken as Gaussian";
  }
  return model;
}

}  // namespace stillfield
