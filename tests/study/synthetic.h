// Synthetic fields with known labels for the studies and tests.
#ifndef STILLFIELD_TESTS_STUDY_SYNTHETIC_H_
#define STILLFIELD_TESTS_STUDY_SYNTHETIC_H_

#include <cstdint>
#include <vector>

#include "core/volume.h"
#include "random/stream.h"

namespace stillfield::study {

struct TruthField {
  Volume<std::uint8_t> labels;  // 0-based
  double fraction = 0.0;        // share of label 1
};

// Disks of label 1 on label 0: `count` of them, uniform in [8, 17], radii uniform in [3, 14],
// centres uniform over the field, overlaps allowed.
TruthField draw_disks(int side, std::uint64_t seed);

// A draw of the K-label Potts field without class field, by `sweeps` Gibbs sweeps from independent
// uniform labels.
TruthField draw_potts(int side, int classes, double beta, int sweeps, std::uint64_t seed);

// label + N(0, sigma^2) for each pixel.
Volume<float> add_noise(const TruthField& truth, double sigma, std::uint64_t seed);

// 2 |A and B| / (|A| + |B|) of label 1; `found` is 1-based.
double dice(const TruthField& truth, const Volume<std::uint8_t>& found);

}  // namespace stillfield::study

#endif  // STILLFIELD_TESTS_STUDY_SYNTHETIC_H_
