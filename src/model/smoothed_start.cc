#include "model/smoothed_start.h"

#include <algorithm>
#include <cmath>
#include <vector>

#include "model/mixture_em.h"

namespace stillfield {
namespace {

// Sum and number of observed levels in a window that slides along one axis.
struct Window {
  std::int64_t sum = 0;
  std::int64_t count = 0;
};

// Mean level of each pixel's square, in levels; -1 where the square holds no observed pixel.
Volume<float> box_mean(const GreyLevels& grey, int radius) {
  const Extent e = grey.level.extent();
  Volume<float> mean(e);
  std::vector<Window> column(static_cast<std::size_t>(e.width));
  for (int z = 0; z < e.depth; ++z) {
    std::fill(column.begin(), column.end(), Window{});
    const auto take_row = [&](int y, int sign) {
      if (y < 0 || y >= e.height) return;
      const std::uint16_t* row = grey.level.row(y, z);
      for (int x = 0; x < e.width; ++x) {
        if (row[x] == grey.missing()) continue;
        column[static_cast<std::size_t>(x)].sum += sign * row[x];
        column[static_cast<std::size_t>(x)].count += sign;
      }
    };
    for (int y = 0; y < radius; ++y) take_row(y, 1);
    for (int y = 0; y < e.height; ++y) {
      take_row(y + radius, 1);
      take_row(y - radius - 1, -1);
      Window w;
      const auto take_column = [&](int x, int sign) {
        if (x < 0 || x >= e.width) return;
        w.sum += sign * column[static_cast<std::size_t>(x)].sum;
        w.count += sign * column[static_cast<std::size_t>(x)].count;
      };
      for (int x = 0; x < radius; ++x) take_column(x, 1);
      float* out = mean.row(y, z);
      for (int x = 0; x < e.width; ++x) {
        take_column(x + radius, 1);
        take_column(x - radius - 1, -1);
        out[x] = w.count > 0
                     ? static_cast<float>(static_cast<double>(w.sum) / static_cast<double>(w.count))
                     : -1.0f;
      }
    }
  }
  return mean;
}

// Averages rounded to levels; each level that occurs stands at the mean of its averages.
GreyHistogram histogram_of(const GreyLevels& grey, const Volume<float>& mean) {
  std::vector<double> weight(static_cast<std::size_t>(grey.levels)), sum(weight.size());
  const Extent e = mean.extent();
  for (int z = 0; z < e.depth; ++z) {
    for (int y = 0; y < e.height; ++y) {
      for (int x = 0; x < e.width; ++x) {
        const double v = mean.at(x, y, z);
        if (v < 0.0) continue;
        const auto l = static_cast<std::size_t>(v + 0.5);
        weight[l] += 1.0;
        sum[l] += v;
      }
    }
  }
  GreyHistogram h;
  h.step = grey.step;
  for (std::size_t l = 0; l < weight.size(); ++l) {
    if (weight[l] == 0.0) continue;
    h.value.push_back(grey.origin + grey.step * (sum[l] / weight[l]));
    h.weight.push_back(weight[l]);
  }
  return h;
}

// Class means and deviations of the original pixels under the starting labels.
GaussianClasses measure_classes(const GreyLevels& grey, const Volume<std::uint8_t>& labels,
                                const GaussianClasses& fallback) {
  const std::size_t classes = fallback.mean.size();
  std::vector<std::int64_t> n(classes), sum(classes), square(classes);
  const Extent e = labels.extent();
  for (int z = 0; z < e.depth; ++z) {
    for (int y = 0; y < e.height; ++y) {
      for (int x = 0; x < e.width; ++x) {
        const std::int64_t l = grey.level.at(x, y, z);
        if (l == grey.missing()) continue;
        const std::size_t k = labels.at(x, y, z);
        ++n[k];
        sum[k] += l;
        square[k] += l * l;
      }
    }
  }
  GaussianClasses out = fallback;
  double pooled = 0.0, total = 0.0;
  for (std::size_t k = 0; k < classes; ++k) {
    if (n[k] < 2) continue;
    const double count = static_cast<double>(n[k]);
    const double mean = static_cast<double>(sum[k]) / count;
    const double variance =
        std::max(static_cast<double>(square[k]) / count - mean * mean, 1.0 / 12.0);
    out.mean[k] = grey.origin + grey.step * mean;
    out.sd[k] = grey.step * std::sqrt(variance);
    pooled += count * variance;
    total += count;
  }
  if (out.shared_variance && total > 0.0) {
    out.sd.assign(classes, grey.step * std::sqrt(pooled / total));
  }
  if (!std::is_sorted(out.mean.begin(), out.mean.end())) return fallback;
  return out;
}

}  // namespace

LabelStart smoothed_start(const GreyLevels& grey, int classes, int radius, bool shared_variance) {
  const Volume<float> mean = box_mean(grey, radius);
  const GreyHistogram histogram = histogram_of(grey, mean);
  // In a tiny image averages may coincide where pixels differ.
  if (radius > 0 && static_cast<int>(histogram.value.size()) < classes) {
    return smoothed_start(grey, classes, 0, shared_variance);
  }
  const Mixture mixture = fit_mixture(histogram, classes, shared_variance);
  LabelStart start{Volume<std::uint8_t>(grey.level.extent()), {}};
  std::vector<std::uint8_t> class_of_level(static_cast<std::size_t>(grey.levels));
  for (int l = 0; l < grey.levels; ++l) {
    class_of_level[static_cast<std::size_t>(l)] =
        static_cast<std::uint8_t>(most_likely_class(mixture, grey.value(l)));
  }
  const Extent e = grey.level.extent();
  for (int z = 0; z < e.depth; ++z) {
    for (int y = 0; y < e.height; ++y) {
      for (int x = 0; x < e.width; ++x) {
        const float v = mean.at(x, y, z);
        const auto l = static_cast<std::size_t>(v < 0.0f ? 0.0f : v + 0.5f);
        start.labels.at(x, y, z) = class_of_level[std::min(l, class_of_level.size() - 1)];
      }
    }
  }
  start.classes = measure_classes(grey, start.labels, mixture.classes);
  return start;
}

}  // namespace stillfield
