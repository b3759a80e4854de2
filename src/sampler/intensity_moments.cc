#include "sampler/intensity_moments.h"

#include <algorithm>
#include <cmath>

namespace stillfield {
namespace {

constexpr double kPixelRhatLimit = 1.05;

}  // namespace

IntensityTotals::IntensityTotals(const ObservedIntensity& observed,
                                 const AlignedBuffer<float>& shift, int chains)
    : observed_(observed), shift_(shift), chains_(static_cast<std::size_t>(chains)) {
  for (ChainTotals& c : chains_) {
    for (AlignedBuffer<float>* plane : {&c.mean, &c.squares, &c.between}) {
      *plane = AlignedBuffer<float>(observed.layout->elements());
    }
  }
}

void IntensityTotals::take(int chain_number, IntensityChain& chain) {
  if (chain.pending == 0) return;
  ChainTotals& c = chains_[static_cast<std::size_t>(chain_number)];
  const double n = chain.pending;
  const double before = c.sweeps;
  for (std::size_t i = 0; i < chain.sum.size(); ++i) {
    const double d = static_cast<double>(chain.sum[i]) / n;
    const double squares = std::max(0.0, static_cast<double>(chain.square[i]) - n * d * d);
    const double e = d - static_cast<double>(c.mean[i]);
    const double apart = e * e * before * n / (before + n);
    c.mean[i] = static_cast<float>(static_cast<double>(c.mean[i]) + e * n / (before + n));
    c.squares[i] = static_cast<float>(static_cast<double>(c.squares[i]) + squares + apart);
    c.between[i] = static_cast<float>(static_cast<double>(c.between[i]) + apart);
    chain.sum[i] = 0.0f;
    chain.square[i] = 0.0f;
  }
  c.sweeps += chain.pending;
  ++c.batches;
  chain.pending = 0;
}

IntensityMoments IntensityTotals::moments() const {
  const Extent& extent = observed_.layout->extent();
  IntensityMoments result{Volume<float>(extent), Volume<float>(extent)};
  double sweeps = 0.0;
  for (const ChainTotals& c : chains_) sweeps += c.sweeps;
  observed_.layout->for_each_pixel([&](std::size_t at, int x, int y, int z) {
    double mean = 0.0, squares = 0.0;
    for (const ChainTotals& c : chains_)
      mean += c.sweeps / sweeps * static_cast<double>(c.mean[at]);
    for (const ChainTotals& c : chains_) {
      const double off = static_cast<double>(c.mean[at]) - mean;
      squares += static_cast<double>(c.squares[at]) + c.sweeps * off * off;
    }
    result.mean.at(x, y, z) =
        static_cast<float>(observed_.centre + static_cast<double>(shift_[at]) + mean);
    result.variance.at(x, y, z) = static_cast<float>(squares / (sweeps - 1.0));
  });
  return result;
}

IntensityQuality IntensityTotals::quality() const {
  const auto chains = static_cast<double>(chains_.size());
  double squared_error = 0.0, worse = 0.0;
  observed_.layout->for_each_pixel([&](std::size_t at, int, int, int) {
    double mcse2 = 0.0, within = 0.0, mean = 0.0, apart = 0.0;
    for (const ChainTotals& c : chains_) {
      const double n = c.sweeps;
      mcse2 += static_cast<double>(c.between[at]) / ((c.batches - 1.0) * n) / (chains * chains);
      within += static_cast<double>(c.squares[at]) / n / chains;
      mean += static_cast<double>(c.mean[at]) / chains;
    }
    for (const ChainTotals& c : chains_) {
      const double off = static_cast<double>(c.mean[at]) - mean;
      apart += off * off / std::max(1.0, chains - 1.0);
    }
    if (within <= 0.0) return;
    squared_error += mcse2 / within;
    worse += std::sqrt((within + apart) / within) > kPixelRhatLimit;
  });
  const auto sites = static_cast<double>(observed_.layout->extent().sites());
  return {std::sqrt(squared_error / sites), worse / sites};
}

}  // namespace stillfield
