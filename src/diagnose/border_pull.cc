#include "diagnose/border_pull.h"

namespace stillfield {

void BorderPull::look(const ResidualBlock& block, const GaussianClasses& classes,
                      std::size_t first, std::size_t step) {
  const auto label = [&](std::size_t n) { return block.label[first + n * step]; };
  const std::uint8_t a = label(2), b = label(3);
  if (a == b || a == 0 || b == 0) return;
  if (label(0) != a || label(1) != a || label(4) != b || label(5) != b) return;
  const auto add_side = [&](std::uint8_t own, std::uint8_t other, float residual) {
    const std::size_t i = own - std::size_t{1}, j = other - std::size_t{1};
    const double d = (classes.mean[j] - classes.mean[i]) / classes.sd[i];
    along_ += d * residual;
    square_ += d * d;
    ++pixels_;
  };
  add_side(a, b, block.residual[first + 2 * step]);
  add_side(b, a, block.residual[first + 3 * step]);
}

void BorderPull::add(const ResidualBlock& block, const GaussianClasses& classes) {
  constexpr std::size_t kSide = kResidualBlock, kRun = 6;
  for (std::size_t line = 0; line < kSide; ++line) {
    for (std::size_t at = 0; at + kRun <= kSide; ++at) {
      look(block, classes, line * kSide + at, 1);
      look(block, classes, at * kSide + line, kSide);
    }
  }
}

}  // namespace stillfield
