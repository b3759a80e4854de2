#include "model/impulse_atoms.h"

#include <algorithm>

namespace stillfield {
namespace {

constexpr double kMostEqualPairs = 0.25;

bool scattered(View<const float> image, View<const std::uint8_t> usable, double value) {
  double pairs = 0.0, equal = 0.0;
  for (int z = 0; z < image.depth(); ++z) {
    for (int y = 0; y < image.height(); ++y) {
      for (int x = 0; x < image.width(); ++x) {
        if (usable.at(x, y, z) == 0 || image.at(x, y, z) != value) continue;
        if (x + 1 == image.width()) continue;
        pairs += 1.0;
        equal += image.at(x + 1, y, z) == value ? 1.0 : 0.0;
      }
    }
  }
  return equal <= kMostEqualPairs * pairs;
}

// Median difference of successive distinct values; 0 if there is one value.
double usual_step(const std::vector<double>& sorted) {
  std::vector<double> steps;
  for (std::size_t i = 1; i < sorted.size(); ++i) {
    if (sorted[i] > sorted[i - 1]) steps.push_back(sorted[i] - sorted[i - 1]);
  }
  if (steps.empty()) return 0.0;
  const auto middle = steps.begin() + static_cast<std::ptrdiff_t>(steps.size() / 2);
  std::nth_element(steps.begin(), middle, steps.end());
  return *middle;
}

}  // namespace

ImpulseAtoms find_atoms(View<const float> image, View<const std::uint8_t> usable) {
  std::vector<double> grey;
  for (int z = 0; z < image.depth(); ++z) {
    for (int y = 0; y < image.height(); ++y) {
      for (int x = 0; x < image.width(); ++x) {
        if (usable.at(x, y, z) != 0) grey.push_back(image.at(x, y, z));
      }
    }
  }
  ImpulseAtoms atoms;
  if (grey.empty()) return atoms;
  std::sort(grey.begin(), grey.end());
  atoms.low = grey.front();
  atoms.high = grey.back();
  // Of whole counts every value holds many pixels: look at least two usual steps around.
  const double around = 2.0 * std::max(atoms.least_noise(), usual_step(grey));
  const auto least =
      static_cast<std::ptrdiff_t>(kLeastImpulseShare * static_cast<double>(grey.size()));
  for (auto first = grey.begin(); first != grey.end();) {
    const auto last = std::upper_bound(first, grey.end(), *first);
    if (last - first > std::max<std::ptrdiff_t>(least, 1)) {
      const auto near = std::upper_bound(last, grey.end(), *first + around) -
                        std::lower_bound(grey.begin(), first, *first - around);
      // On a grid of whole values four others lie around: a half of their number is a safe guess of
      // the pixels that would have this value anyway.
      const auto held = static_cast<double>(last - first);
      const double certainty = 1.0 - 0.5 * (static_cast<double>(near) - held) / held;
      if (certainty > 0.5 && scattered(image, usable, *first)) {
        atoms.list.push_back({*first, certainty});
      }
    }
    first = last;
  }
  return atoms;
}

}  // namespace stillfield
