#include "measure/edge_leak.h"

#include <array>
#include <cmath>
#include <vector>

namespace stillfield {
namespace {

// Class across the border for pixels 1 or 2 px from it, 0 for the others.
Volume<std::uint8_t> across_the_border(View<const std::uint8_t> labels) {
  constexpr std::array<std::array<int, 2>, 4> kNeighbours{{{1, 0}, {-1, 0}, {0, 1}, {0, -1}}};
  const int width = labels.width(), height = labels.height();
  Volume<std::uint8_t> first(labels.extent()), across(labels.extent());
  const auto for_neighbours = [&](int x, int y, const auto& visit) {
    for (const auto& [dx, dy] : kNeighbours) {
      const int u = x + dx, v = y + dy;
      if (u >= 0 && v >= 0 && u < width && v < height) visit(u, v);
    }
  };
  for (int y = 0; y < height; ++y) {
    for (int x = 0; x < width; ++x) {
      for_neighbours(x, y, [&](int u, int v) {
        if (labels.at(u, v) != labels.at(x, y)) first.at(x, y) = labels.at(u, v);
      });
    }
  }
  for (int y = 0; y < height; ++y) {
    for (int x = 0; x < width; ++x) {
      across.at(x, y) = first.at(x, y);
      if (first.at(x, y) != 0) continue;
      for_neighbours(x, y, [&](int u, int v) {
        if (first.at(u, v) != 0) across.at(x, y) = first.at(u, v);
      });
    }
  }
  return across;
}

// Sums over pixels, a row at a time in row order.
struct GreySum {
  double sum = 0;
  double row = 0;
  std::int64_t pixels = 0;

  void add(double value) {
    row += value;
    ++pixels;
  }
  void end_row() {
    sum += row;
    row = 0;
  }
  double mean() const { return sum / static_cast<double>(pixels); }
};

}  // namespace

double edge_leak(View<const float> grey, View<const std::uint8_t> labels, int classes) {
  const Volume<std::uint8_t> across = across_the_border(labels);
  const auto n = static_cast<std::size_t>(classes);
  std::vector<GreySum> inside(n), all(n);
  // The border pixels of class k (row) towards class j (column).
  std::vector<GreySum> border(n * n);
  for (int y = 0; y < labels.height(); ++y) {
    for (int x = 0; x < labels.width(); ++x) {
      const double value = double{grey.at(x, y)};
      if (!std::isfinite(value)) continue;
      const auto k = static_cast<std::size_t>(labels.at(x, y) - 1);
      all[k].add(value);
      const int j = across.at(x, y);
      (j == 0 ? inside[k] : border[k * n + static_cast<std::size_t>(j - 1)]).add(value);
    }
    for (std::vector<GreySum>* sums : {&inside, &all, &border}) {
      for (GreySum& s : *sums) s.end_row();
    }
  }
  std::vector<double> far(n);
  std::vector<bool> usable(n);
  for (std::size_t k = 0; k < n; ++k) {
    usable[k] = inside[k].pixels >= kFewPixels && 10 * inside[k].pixels >= all[k].pixels;
    far[k] = usable[k] ? inside[k].mean() : all[k].mean();
  }
  double lost = 0, contrast = 0;
  for (std::size_t k = 0; k < n; ++k) {
    for (std::size_t j = 0; j < n; ++j) {
      const GreySum& b = border[k * n + j];
      if (b.pixels == 0 || !usable[k] || all[j].pixels == 0) continue;
      const auto pixels = static_cast<double>(b.pixels);
      lost += (far[j] > far[k] ? 1 : -1) * (b.sum - pixels * far[k]);
      contrast += pixels * std::fabs(far[j] - far[k]);
    }
  }
  return contrast > 0 ? lost / contrast : 0.0;
}

}  // namespace stillfield
