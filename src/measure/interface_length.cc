#include "measure/interface_length.h"

#include <cmath>
#include <numbers>

namespace stillfield {
namespace {

// Pairs of pixels (x, y), (x + dx, y + 1 or 0) of which exactly one has the label.
std::int64_t crossings(View<const std::uint8_t> labels, int label, View<const std::uint8_t> usable,
                       int dx, int dy) {
  const bool all = usable.extent().sites() == 0;
  std::int64_t count = 0;
  for (int y = 0; y + dy < labels.height(); ++y) {
    const std::uint8_t* here = labels.row(y);
    const std::uint8_t* there = labels.row(y + dy);
    for (int x = dx < 0 ? 1 : 0; x + (dx > 0 ? 1 : 0) < labels.width(); ++x) {
      if ((here[x] == label) == (there[x + dx] == label)) continue;
      count += all || (usable.at(x, y) != 0 && usable.at(x + dx, y + dy) != 0);
    }
  }
  return count;
}

}  // namespace

double interface_length(View<const std::uint8_t> labels, int label,
                        View<const std::uint8_t> usable) {
  const auto n = [&](int dx, int dy) {
    return static_cast<double>(crossings(labels, label, usable, dx, dy));
  };
  return std::numbers::pi / 8 * (n(1, 0) + n(0, 1) + (n(1, 1) + n(-1, 1)) / std::sqrt(2.0));
}

}  // namespace stillfield
