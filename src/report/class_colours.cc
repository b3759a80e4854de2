#include "report/class_colours.h"

#include <algorithm>

namespace stillfield {
namespace {

constexpr int kDarkest = 40;
constexpr int kLightest = 215;
// Red up and blue down by these leaves 0.299 R + 0.587 G + 0.114 B as it was.
constexpr int kRedTint = 30;
constexpr int kBlueTint = 79;

std::uint8_t channel(int value) {
  return static_cast<std::uint8_t>(std::clamp(value, 0, 255));
}

}  // namespace

Rgb class_colour(int label, int classes) {
  const int steps = std::max(classes - 1, 1);
  const int grey = kDarkest + (kLightest - kDarkest) * (label - 1) / steps;
  const int sign = label % 2 == 1 ? -1 : 1;  // odd classes blue, even ones orange
  return {channel(grey + sign * kRedTint), channel(grey), channel(grey - sign * kBlueTint)};
}

}  // namespace stillfield
