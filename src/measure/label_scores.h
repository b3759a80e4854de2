// How well labels and their probabilities agree with a known truth.
//
// Truth     class 1..K of each pixel; pixels of truth 0 do not count, nor those of label 0, which
//           lie outside the region of interest
// Maths     Dice of class k    2 |A and B| / (|A| + |B|)                        (Dice 1945)
//           Brier score        mean over pixels of sum_k (p_k - 1[z = k])^2, 0..2  (Brier 1950)
//           reliability        pixels by their largest probability in ten equal bins from 0 to 1:
//                              mean of that probability, and how often its class is right
//           calibration error  mean over pixels of |share right - mean probability| of their bin
// NaN       Dice of a class that neither side has; scores of an image whose truth is 0 everywhere
#ifndef STILLFIELD_MEASURE_LABEL_SCORES_H_
#define STILLFIELD_MEASURE_LABEL_SCORES_H_

#include <array>
#include <cstdint>
#include <vector>

#include "core/volume.h"

namespace stillfield {

inline constexpr std::size_t kReliabilityBins = 10;

struct ReliabilityBin {
  std::int64_t pixels = 0;
  double mean_probability = 0;
  double share_right = 0;
};

struct LabelScores {
  int classes = 0;
  std::int64_t pixels = 0;              // that count
  std::vector<std::int64_t> confusion;  // [truth * classes + found], classes from 0
  double misclassified = 0;             // share of pixels
  std::vector<double> dice;             // of each class
  std::vector<double> true_fraction;    // of each class
  double brier = 0;
  std::array<ReliabilityBin, kReliabilityBins> reliability{};
  double calibration_error = 0;
};

// `labels` 0..K; one plane of probability a class. Throws Error(kInput) if a truth is above K.
LabelScores score_labels(View<const std::uint8_t> labels,
                         const std::vector<View<const float>>& probability,
                         View<const float> truth);

}  // namespace stillfield

#endif  // STILLFIELD_MEASURE_LABEL_SCORES_H_
