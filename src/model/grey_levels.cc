#include "model/grey_levels.h"

#include <algorithm>
#include <cmath>
#include <cstdio>
#include <limits>

#include "core/error.h"

namespace stillfield {
namespace {

constexpr int kMaxLevels = 65535;
constexpr double kWideRange = 50.0;
constexpr double kKeptSpans = 25.0;

template <class Visit>
void for_each_pixel(View<const float> pixels, const Visit& visit) {
  for (int z = 0; z < pixels.depth(); ++z) {
    for (int y = 0; y < pixels.height(); ++y) {
      const float* row = pixels.row(y, z);
      for (int x = 0; x < pixels.width(); ++x) visit(x, y, z, row[x]);
    }
  }
}

struct Range {
  double low = std::numeric_limits<double>::infinity();
  double high = -std::numeric_limits<double>::infinity();
  bool integers = true;
  std::int64_t observed = 0;
  std::int64_t infinite = 0;
};

Range find_range(View<const float> pixels) {
  Range r;
  for_each_pixel(pixels, [&r](int, int, int, float v) {
    if (!std::isfinite(v)) {
      r.infinite += std::isinf(v) ? 1 : 0;
      return;
    }
    ++r.observed;
    r.low = std::min(r.low, static_cast<double>(v));
    r.high = std::max(r.high, static_cast<double>(v));
    r.integers = r.integers && v == std::floor(v) && std::fabs(v) < 16777216.0f;
  });
  return r;
}

// Clips the range of an image with far outliers; see the header.
bool clip_outliers(View<const float> pixels, Range& r) {
  std::vector<float> values;
  values.reserve(static_cast<std::size_t>(r.observed));
  for_each_pixel(pixels, [&values](int, int, int, float v) {
    if (std::isfinite(v)) values.push_back(v);
  });
  const auto quantile = [&values](double p) {
    const auto at = static_cast<std::ptrdiff_t>(p * static_cast<double>(values.size() - 1));
    std::nth_element(values.begin(), values.begin() + at, values.end());
    return static_cast<double>(values[static_cast<std::size_t>(at)]);
  };
  const double low = quantile(0.001);
  const double high = quantile(0.999);
  const double span = high - low;
  if (!(span > 0.0) || r.high - r.low <= kWideRange * span) return false;
  r.low = std::max(r.low, low - kKeptSpans * span);
  r.high = std::min(r.high, high + kKeptSpans * span);
  return true;
}

}  // namespace

int GreyLevels::distinct() const {
  return static_cast<int>(
      std::count_if(histogram.begin(), histogram.end(), [](std::int64_t n) { return n > 0; }));
}

GreyLevels make_grey_levels(View<const float> pixels) {
  Range range = find_range(pixels);
  if (range.observed == 0) {
    throw Error(ErrorKind::kInput,
                "every pixel is missing (not a number), so there is nothing to analyse; check how "
                "the file was exported");
  }
  GreyLevels g;
  g.level = Volume<std::uint16_t>(pixels.extent());
  g.observed = range.observed;
  const bool exact = range.integers && range.high - range.low <= kMaxLevels;
  if (!exact && clip_outliers(pixels, range)) {
    g.notes.emplace_back(
        "a few extreme grey values stretch the range; they were clipped for the analysis");
  }
  const double width = range.high - range.low;
  g.origin = range.low;
  if (exact) {
    g.levels = std::min(static_cast<int>(width) + 1, kMaxLevels);
    if (width >= kMaxLevels)
      g.notes.emplace_back("the two brightest of 65536 grey values share a level");
  } else {
    g.levels = width > 0.0 ? kMaxLevels : 1;
    g.step = width > 0.0 ? width / (kMaxLevels - 1) : 1.0;
    char text[96];
    std::snprintf(text, sizeof text, "grey values were rounded to 65535 levels, %.3g apart",
                  g.step);
    g.notes.emplace_back(text);
  }
  const std::int64_t missing = pixels.extent().sites() - range.observed;
  if (missing > 0) {
    g.notes.push_back(std::to_string(missing) + " missing pixels (not finite numbers, or masked)");
  }
  g.histogram.assign(static_cast<std::size_t>(g.levels), 0);
  for_each_pixel(pixels, [&g](int x, int y, int z, float v) {
    std::uint16_t l = g.missing();
    if (std::isfinite(v)) {
      const double at = std::floor((v - g.origin) / g.step + 0.5);
      l = static_cast<std::uint16_t>(std::clamp(at, 0.0, static_cast<double>(g.levels - 1)));
      ++g.histogram[l];
    }
    g.level.at(x, y, z) = l;
  });
  return g;
}

Volume<float> grey_values(const GreyLevels& grey) {
  Volume<float> plane(grey.level.extent());
  for (int y = 0; y < plane.height(); ++y) {
    for (int x = 0; x < plane.width(); ++x) {
      const std::uint16_t level = grey.level.at(x, y);
      plane.at(x, y) = level == grey.missing() ? std::numeric_limits<float>::quiet_NaN()
                                               : static_cast<float>(grey.value(level));
    }
  }
  return plane;
}

}  // namespace stillfield
