// Label images without what is only noise: plausible truths for the parametric bootstrap.
//
// Why      a draw from the posterior is full of single wrong pixels, and the most probable labels
//          keep a few specks; as simulated truths both would put particles into the scene that
//          were never there
// Majority the most frequent label of the 3 x 3 pixels around; the pixel's own where it is among
//          the most frequent, otherwise the lowest of these
// Specks   8-connected components of a class with fewer pixels than its `least_area` go to the
//          class most frequent among their 4-neighbours (of equally frequent ones the lowest);
//          classes are taken from K down to 1
// Labels   1..K
#ifndef STILLFIELD_MEASURE_LABEL_CLEANING_H_
#define STILLFIELD_MEASURE_LABEL_CLEANING_H_

#include <cstdint>
#include <vector>

#include "core/volume.h"

namespace stillfield {

Volume<std::uint8_t> majority_labels(View<const std::uint8_t> labels, int classes);

// `least_area[k - 1]` is of class k.
Volume<std::uint8_t> without_specks(View<const std::uint8_t> labels,
                                    const std::vector<double>& least_area);

// Pixels a component of each class needs to stand out: its mean differs from that of the nearest
// other class by kClearSpeck standard errors (common practice, no source).
inline constexpr double kClearSpeck = 5.0;
std::vector<double> least_clear_areas(const std::vector<double>& mean,
                                      const std::vector<double>& sd);

}  // namespace stillfield

#endif  // STILLFIELD_MEASURE_LABEL_CLEANING_H_
