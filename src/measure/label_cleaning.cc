#include "measure/label_cleaning.h"

#include <algorithm>
#include <array>
#include <cmath>
#include <limits>

#include "measure/particles.h"

namespace stillfield {
namespace {

Volume<std::uint8_t> copy_of(View<const std::uint8_t> labels) {
  Volume<std::uint8_t> copy(labels.extent());
  for (int y = 0; y < labels.height(); ++y) std::copy_n(labels.row(y), labels.width(), copy.row(y));
  return copy;
}

// The label with the largest count, `own` if it is one of these.
int most_frequent(const std::vector<int>& count, int own) {
  int best = own;
  for (std::size_t k = 0; k < count.size(); ++k) {
    if (best == 0 || count[k] > count[static_cast<std::size_t>(best - 1)]) {
      best = static_cast<int>(k) + 1;
    }
  }
  return best;
}

void remove_specks(int label, double least_area, std::size_t classes,
                   Volume<std::uint8_t>& labels) {
  const Particles found = find_particles(labels.view(), label, {}, {8, 1});
  const auto small = [&](std::int32_t c) {
    return c > 0 &&
           static_cast<double>(found.list[static_cast<std::size_t>(c - 1)].area) < least_area;
  };
  const int width = labels.width(), height = labels.height();
  constexpr std::array<std::array<int, 2>, 4> kNeighbours{{{1, 0}, {-1, 0}, {0, 1}, {0, -1}}};
  std::vector<std::vector<int>> around(found.list.size());
  for (int y = 0; y < height; ++y) {
    for (int x = 0; x < width; ++x) {
      const std::int32_t c = found.component.at(x, y);
      if (!small(c)) continue;
      std::vector<int>& count = around[static_cast<std::size_t>(c - 1)];
      count.resize(classes);
      for (const auto& [dx, dy] : kNeighbours) {
        const int u = x + dx, v = y + dy;
        if (u < 0 || v < 0 || u >= width || v >= height || labels.at(u, v) == label) continue;
        ++count[static_cast<std::size_t>(labels.at(u, v) - 1)];
      }
    }
  }
  for (int y = 0; y < height; ++y) {
    for (int x = 0; x < width; ++x) {
      const std::int32_t c = found.component.at(x, y);
      if (!small(c)) continue;
      const std::vector<int>& count = around[static_cast<std::size_t>(c - 1)];
      if (*std::max_element(count.begin(), count.end()) == 0) continue;  // fills the frame
      labels.at(x, y) = static_cast<std::uint8_t>(most_frequent(count, 0));
    }
  }
}

}  // namespace

Volume<std::uint8_t> majority_labels(View<const std::uint8_t> labels, int classes) {
  const int width = labels.width(), height = labels.height();
  Volume<std::uint8_t> out(labels.extent());
  std::vector<int> count(static_cast<std::size_t>(classes));
  for (int y = 0; y < height; ++y) {
    for (int x = 0; x < width; ++x) {
      std::fill(count.begin(), count.end(), 0);
      for (int v = std::max(0, y - 1); v <= std::min(height - 1, y + 1); ++v) {
        for (int u = std::max(0, x - 1); u <= std::min(width - 1, x + 1); ++u) {
          ++count[static_cast<std::size_t>(labels.at(u, v) - 1)];
        }
      }
      out.at(x, y) = static_cast<std::uint8_t>(most_frequent(count, labels.at(x, y)));
    }
  }
  return out;
}

Volume<std::uint8_t> without_specks(View<const std::uint8_t> labels,
                                    const std::vector<double>& least_area) {
  Volume<std::uint8_t> out = copy_of(labels);
  for (int k = static_cast<int>(least_area.size()); k >= 1; --k) {
    remove_specks(k, least_area[static_cast<std::size_t>(k - 1)], least_area.size(), out);
  }
  return out;
}

std::vector<double> least_clear_areas(const std::vector<double>& mean,
                                      const std::vector<double>& sd) {
  std::vector<double> area;
  for (std::size_t k = 0; k < mean.size(); ++k) {
    double gap = std::numeric_limits<double>::infinity();
    for (std::size_t j = 0; j < mean.size(); ++j) {
      if (j != k) gap = std::min(gap, std::fabs(mean[k] - mean[j]));
    }
    const double standard_errors = kClearSpeck * sd[k] / gap;
    area.push_back(gap > 0 ? standard_errors * standard_errors : 0.0);
  }
  return area;
}

}  // namespace stillfield
