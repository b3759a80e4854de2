#include "measure/label_scores.h"

#include <algorithm>
#include <cmath>
#include <limits>
#include <string>

#include "core/error.h"

namespace stillfield {
namespace {

constexpr double kNan = std::numeric_limits<double>::quiet_NaN();

struct BinSums {
  double probability = 0;
  std::int64_t right = 0;
};

int true_class(float truth, int classes) {
  const int k = static_cast<int>(truth);
  if (!(truth >= 0) || static_cast<float>(k) != truth || k > classes) {
    throw Error(ErrorKind::kInput, "its truth holds the value " + std::to_string(truth) +
                                       ", which is no class; truth images hold 1.." +
                                       std::to_string(classes) + ", and 0 where nothing is known");
  }
  return k;
}

void finish(const std::array<BinSums, kReliabilityBins>& bins, LabelScores& s) {
  const auto k = static_cast<std::size_t>(s.classes);
  const auto n = static_cast<double>(s.pixels);
  std::int64_t right = 0;
  for (std::size_t c = 0; c < k; ++c) {
    std::int64_t found = 0, there = 0;
    for (std::size_t other = 0; other < k; ++other) {
      found += s.confusion[other * k + c];
      there += s.confusion[c * k + other];
    }
    const std::int64_t both = s.confusion[c * k + c];
    right += both;
    s.dice.push_back(found + there > 0
                         ? 2.0 * static_cast<double>(both) / static_cast<double>(found + there)
                         : kNan);
    s.true_fraction.push_back(n > 0 ? static_cast<double>(there) / n : kNan);
  }
  s.misclassified = n > 0 ? 1.0 - static_cast<double>(right) / n : kNan;
  s.brier = n > 0 ? s.brier / n : kNan;
  for (std::size_t b = 0; b < kReliabilityBins; ++b) {
    ReliabilityBin& bin = s.reliability[b];
    if (bin.pixels == 0) continue;
    const auto in_bin = static_cast<double>(bin.pixels);
    bin.mean_probability = bins[b].probability / in_bin;
    bin.share_right = static_cast<double>(bins[b].right) / in_bin;
    s.calibration_error += in_bin * std::fabs(bin.share_right - bin.mean_probability);
  }
  s.calibration_error = n > 0 ? s.calibration_error / n : kNan;
}

}  // namespace

LabelScores score_labels(View<const std::uint8_t> labels,
                         const std::vector<View<const float>>& probability,
                         View<const float> truth) {
  LabelScores s;
  s.classes = static_cast<int>(probability.size());
  s.confusion.resize(probability.size() * probability.size());
  std::array<BinSums, kReliabilityBins> bins{};
  for (int y = 0; y < labels.height(); ++y) {
    for (int x = 0; x < labels.width(); ++x) {
      const int z = true_class(truth.at(x, y), s.classes);
      if (z == 0 || labels.at(x, y) == 0) continue;
      ++s.pixels;
      const auto found = static_cast<std::size_t>(labels.at(x, y) - 1);
      ++s.confusion[static_cast<std::size_t>(z - 1) * probability.size() + found];
      for (std::size_t k = 0; k < probability.size(); ++k) {
        const double d = probability[k].at(x, y) - (static_cast<int>(k) == z - 1 ? 1.0 : 0.0);
        s.brier += d * d;
      }
      const double top = probability[found].at(x, y);
      const auto bin = std::min(static_cast<std::size_t>(std::max(top, 0.0) * kReliabilityBins),
                                kReliabilityBins - 1);
      ++s.reliability[bin].pixels;
      bins[bin].probability += top;
      bins[bin].right += static_cast<int>(found) == z - 1;
    }
  }
  finish(bins, s);
  return s;
}

}  // namespace stillfield
