#include "model/label_scene.h"

#include <algorithm>
#include <cmath>

#include "core/elementary.h"
#include "model/square_matrix.h"
#include "random/stream.h"

namespace stillfield {
namespace {

constexpr std::int64_t kFittedElements = 8 << 20;  // 64 MB

Volume<double> indicator(View<const std::uint8_t> labels, int label) {
  Volume<double> plane(labels.extent());
  for (int y = 0; y < labels.height(); ++y) {
    for (int x = 0; x < labels.width(); ++x) plane.at(x, y) = labels.at(x, y) == label ? 1 : 0;
  }
  return plane;
}

// Solves a x = b for a symmetric positive definite a.
std::vector<double> solve(const SquareMatrix& a, const std::vector<double>& b) {
  const SquareMatrix l = cholesky(a);
  std::vector<double> x = b;
  for (int i = 0; i < a.d; ++i) {
    for (int j = 0; j < i; ++j)
      x[static_cast<std::size_t>(i)] -= l(i, j) * x[static_cast<std::size_t>(j)];
    x[static_cast<std::size_t>(i)] /= l(i, i);
  }
  for (int i = a.d - 1; i >= 0; --i) {
    for (int j = i + 1; j < a.d; ++j)
      x[static_cast<std::size_t>(i)] -= l(j, i) * x[static_cast<std::size_t>(j)];
    x[static_cast<std::size_t>(i)] /= l(i, i);
  }
  return x;
}

// One pass of the blur along rows; the kernel is renormalised at the frame.
Volume<double> blurred_rows(const Volume<double>& plane, const std::vector<double>& weight) {
  const int reach = static_cast<int>(weight.size()) / 2;
  Volume<double> out(plane.extent());
  for (int y = 0; y < plane.height(); ++y) {
    for (int x = 0; x < plane.width(); ++x) {
      double sum = 0, inside = 0;
      for (int u = std::max(0, x - reach); u <= std::min(plane.width() - 1, x + reach); ++u) {
        const double w = weight[static_cast<std::size_t>(u - x + reach)];
        sum += w * plane.at(u, y);
        inside += w;
      }
      out.at(x, y) = sum / inside;
    }
  }
  return out;
}

Volume<double> transposed(const Volume<double>& plane) {
  Volume<double> out({plane.height(), plane.width()});
  for (int y = 0; y < plane.height(); ++y) {
    for (int x = 0; x < plane.width(); ++x) out.at(y, x) = plane.at(x, y);
  }
  return out;
}

Volume<double> scene_means(View<const std::uint8_t> labels, double blur,
                           const std::vector<double>& mean) {
  Volume<double> plane(labels.extent());
  for (int y = 0; y < labels.height(); ++y) {
    for (int x = 0; x < labels.width(); ++x) {
      plane.at(x, y) = mean[static_cast<std::size_t>(labels.at(x, y) - 1)];
    }
  }
  return blurred(plane, blur);
}

// The middle rows, few enough for kFittedElements elements in the planes of all classes.
View<const std::uint8_t> fitted_rows(View<const std::uint8_t> labels, int classes, int& first) {
  const int rows = static_cast<int>(kFittedElements / (std::int64_t{classes} * labels.width()));
  const int height = std::clamp(rows, 1, labels.height());
  first = (labels.height() - height) / 2;
  const std::ptrdiff_t stride =
      labels.height() > 1 ? labels.row(1) - labels.row(0) : labels.width();
  return {labels.row(first), {labels.width(), height}, stride};
}

std::vector<double> fit_means(const GreyLevels& grey, View<const std::uint8_t> whole, double blur,
                              const std::vector<double>& start) {
  const int classes = static_cast<int>(start.size());
  int first = 0;
  const View<const std::uint8_t> labels = fitted_rows(whole, classes, first);
  std::vector<Volume<double>> u;
  for (int k = 1; k <= classes; ++k) u.push_back(blurred(indicator(labels, k), blur));
  SquareMatrix normal(classes);
  std::vector<double> right(start.size());
  for (int y = 0; y < labels.height(); ++y) {
    for (int x = 0; x < labels.width(); ++x) {
      const std::uint16_t level = grey.level.at(x, first + y);
      if (level == grey.missing()) continue;
      for (int k = 0; k < classes; ++k) {
        const double a = u[static_cast<std::size_t>(k)].at(x, y);
        if (a == 0) continue;
        right[static_cast<std::size_t>(k)] += a * grey.value(level);
        for (int j = 0; j <= k; ++j) normal(k, j) += a * u[static_cast<std::size_t>(j)].at(x, y);
      }
    }
  }
  // The start counts as a hundredth of a pixel: it decides only where there is nothing else.
  for (int k = 0; k < classes; ++k) {
    for (int j = k + 1; j < classes; ++j) normal(k, j) = normal(j, k);
    normal(k, k) += 0.01;
    right[static_cast<std::size_t>(k)] += 0.01 * start[static_cast<std::size_t>(k)];
  }
  return solve(normal, right);
}

}  // namespace

Volume<double> blurred(const Volume<double>& plane, double sd) {
  const int reach = sd > 0 ? static_cast<int>(std::ceil(4 * sd)) : 0;
  std::vector<double> weight;
  for (int i = -reach; i <= reach; ++i) {
    weight.push_back(i == 0 ? 1.0 : exact_exp(-0.5 * i * i / (sd * sd)));
  }
  return transposed(blurred_rows(transposed(blurred_rows(plane, weight)), weight));
}

GaussianClasses fit_scene(const GreyLevels& grey, View<const std::uint8_t> labels, double blur,
                          const GaussianClasses& start) {
  GaussianClasses fit = start;
  fit.mean = fit_means(grey, labels, blur, start.mean);
  const Volume<double> clean = scene_means(labels, blur, fit.mean);
  std::vector<double> square(start.mean.size()), pixels(start.mean.size());
  for (int y = 0; y < labels.height(); ++y) {
    for (int x = 0; x < labels.width(); ++x) {
      const std::uint16_t level = grey.level.at(x, y);
      if (level == grey.missing()) continue;
      const double residual = grey.value(level) - clean.at(x, y);
      const auto k = static_cast<std::size_t>(labels.at(x, y) - 1);
      square[k] += residual * residual;
      ++pixels[k];
    }
  }
  double all_squares = 0, all_pixels = 0;
  for (std::size_t k = 0; k < square.size(); ++k) {
    all_squares += square[k];
    all_pixels += pixels[k];
  }
  const double overall = std::sqrt(all_squares / all_pixels);
  for (std::size_t k = 0; k < square.size(); ++k) {
    const bool enough = pixels[k] >= kFewPixelsOfAClass && !start.shared_variance;
    fit.sd[k] = enough ? std::sqrt(square[k] / pixels[k]) : overall;
  }
  return fit;
}

GreyLevels simulate_scene(const GreyLevels& like, View<const std::uint8_t> labels, double blur,
                          const GaussianClasses& classes, PhiloxKey key) {
  const Volume<double> clean = scene_means(labels, blur, classes.mean);
  GreyLevels image;
  image.level = Volume<std::uint16_t>(labels.extent());
  image.origin = like.origin;
  image.step = like.step;
  image.levels = like.levels;
  image.histogram.assign(static_cast<std::size_t>(like.levels), 0);
  image.observed = like.observed;
  for (int y = 0; y < labels.height(); ++y) {
    RandomStream random(key, Purpose::kBootstrap, static_cast<std::uint32_t>(y));
    for (int x = 0; x < labels.width(); ++x) {
      const double e = random.normal();
      std::uint16_t& level = image.level.at(x, y);
      level = like.level.at(x, y);
      if (level == like.missing()) continue;
      const double sd = classes.sd[static_cast<std::size_t>(labels.at(x, y) - 1)];
      const double at = (clean.at(x, y) + sd * e - like.origin) / like.step;
      level = static_cast<std::uint16_t>(
          std::clamp(std::floor(at + 0.5), 0.0, static_cast<double>(like.levels - 1)));
      ++image.histogram[level];
    }
  }
  return image;
}

}  // namespace stillfield
