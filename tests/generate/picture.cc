#include "generate/picture.h"

#include <algorithm>
#include <cmath>

namespace stillfield::generate {
namespace {

int mirrored(int i, int n) {
  if (i < 0) i = -1 - i;
  return i < n ? i : 2 * n - 1 - i;
}

double smooth_step(double t) {
  return t * t * (3 - 2 * t);
}

}  // namespace

double SmoothField::corner(std::int64_t i, std::int64_t j) const {
  const auto u = static_cast<std::uint64_t>(i), v = static_cast<std::uint64_t>(j);
  const std::uint64_t bits = mixed(mixed(mixed(key_) + u) + v);
  return static_cast<double>(bits >> 11) * 0x1p-52 - 1;
}

double SmoothField::at(double x, double y) const {
  const double fx = std::floor(x / cell_), fy = std::floor(y / cell_);
  const double tx = smooth_step(x / cell_ - fx), ty = smooth_step(y / cell_ - fy);
  const auto i = static_cast<std::int64_t>(fx), j = static_cast<std::int64_t>(fy);
  const double top = corner(i, j) + tx * (corner(i + 1, j) - corner(i, j));
  const double bottom = corner(i, j + 1) + tx * (corner(i + 1, j + 1) - corner(i, j + 1));
  return top + ty * (bottom - top);
}

void blur(Volume<float>& plane, double sigma) {
  const int radius = static_cast<int>(std::ceil(4 * sigma));
  std::vector<double> weights;
  double total = 0;
  for (int k = -radius; k <= radius; ++k) {
    weights.push_back(exact_exp(-0.5 * k * k / (sigma * sigma)));
    total += weights.back();
  }
  for (double& w : weights) w /= total;

  Volume<float> rows(plane.extent());
  for (int y = 0; y < plane.height(); ++y) {
    for (int x = 0; x < plane.width(); ++x) {
      double sum = 0;
      for (int k = -radius; k <= radius; ++k) {
        sum += weights[k + radius] * plane.at(mirrored(x + k, plane.width()), y);
      }
      rows.at(x, y) = static_cast<float>(sum);
    }
  }
  for (int y = 0; y < plane.height(); ++y) {
    for (int x = 0; x < plane.width(); ++x) {
      double sum = 0;
      for (int k = -radius; k <= radius; ++k) {
        sum += weights[k + radius] * rows.at(x, mirrored(y + k, plane.height()));
      }
      plane.at(x, y) = static_cast<float>(sum);
    }
  }
}

std::uint16_t quantised(double value, int bits) {
  const double top = (1 << bits) - 1;
  return static_cast<std::uint16_t>(std::clamp(std::floor(value + 0.5), 0.0, top));
}

}  // namespace stillfield::generate
