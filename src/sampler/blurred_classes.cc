#include "sampler/blurred_classes.h"

#include <algorithm>
#include <array>
#include <cmath>

#include "simd/label_band.h"

namespace stillfield {
namespace {

// Which windows (2 R + 1)^2 hold one label: runs along rows, then counted down the columns.
class OneLabelWindows {
 public:
  OneLabelWindows(const BlurredField& field) : field_(&field) {
    height_.assign(static_cast<std::size_t>(field.labels.extent().width), 0);
    label_.assign(height_.size(), kGuardLabel);
  }

  // Rows must come in order from -R; after row y, one(x) tells of the window around (x, y - R).
  void add_row(int y) {
    const int r = field_->kernel.radius;
    const std::uint8_t* label = field_->labels.row(y);
    int run = 0;
    for (int x = -r; x < field_->labels.extent().width + r; ++x) {
      run = x > -r && label[x] == label[x - 1] ? run + 1 : 1;
      if (x < r) continue;
      const auto i = static_cast<std::size_t>(x - r);
      const bool along = run >= 2 * r + 1;
      height_[i] = !along ? 0 : (label_[i] == label[x] ? height_[i] + 1 : 1);
      label_[i] = along ? label[x] : kGuardLabel;
    }
  }
  bool one(int x) const {
    return height_[static_cast<std::size_t>(x)] >= 2 * field_->kernel.radius + 1;
  }

 private:
  const BlurredField* field_;
  std::vector<int> height_;
  std::vector<std::uint8_t> label_;
};

// The classes in the window around a pixel and their shares X_k.
struct Shares {
  std::array<double, kMaxLabels> value{};
  std::array<std::size_t, kMaxLabels> present{};
  std::size_t count = 0;
};

void fill_shares(const BlurredField& f, int x, int y, Shares& shares) {
  for (std::size_t i = 0; i < shares.count; ++i) shares.value[shares.present[i]] = 0.0;
  shares.count = 0;
  const int r = f.kernel.radius;
  const double* h = f.kernel.value.data() + r;
  for (int j = -r; j <= r; ++j) {
    const std::uint8_t* label = f.labels.row(y + j) + x;
    for (int i = -r; i <= r; ++i) {
      if (label[i] == kGuardLabel) continue;
      double& v = shares.value[label[i]];
      if (v == 0.0) shares.present[shares.count++] = label[i];
      v += h[j] * h[i];
    }
  }
}

// Sum over a class of w r^2, and its pixels; r^2 w = rho^2 relative.
struct ResidualSums {
  std::vector<double> squares, observed;
};

ResidualSums sum_residuals(const BlurredField& f, std::size_t classes) {
  ResidualSums sums{std::vector<double>(classes, 0.0), std::vector<double>(classes, 0.0)};
  std::vector<double> row(classes);
  const Extent e = f.labels.extent();
  for (int y = 0; y < e.height; ++y) {
    std::fill(row.begin(), row.end(), 0.0);
    for (int x = 0; x < e.width; ++x) {
      const double w = static_cast<double>(f.relative.row(y)[x]);
      if (w == 0.0) continue;
      const double rho = static_cast<double>(f.residual.row(y)[x]);
      row[f.labels.row(y)[x]] += w * rho * rho;
      sums.observed[f.labels.row(y)[x]] += 1.0;
    }
    for (std::size_t k = 0; k < classes; ++k) sums.squares[k] += row[k];
  }
  return sums;
}

}  // namespace

BlurredRegression regress_on_classes(const std::vector<double>& precision, const BlurredField& f) {
  const std::size_t classes = precision.size();
  const int size = static_cast<int>(classes);
  BlurredRegression all{SquareMatrix(size), std::vector<double>(classes, 0.0)};
  const Extent e = f.labels.extent();
  const std::vector<double> nx = f.kernel.inside(e.width), ny = f.kernel.inside(e.height);
  OneLabelWindows windows(f);
  const int r = f.kernel.radius;
  for (int y = -r; y < r; ++y) windows.add_row(y);
  Shares shares;
  for (int y = 0; y < e.height; ++y) {
    windows.add_row(y + r);
    BlurredRegression row{SquareMatrix(size), std::vector<double>(classes, 0.0)};
    const std::uint16_t* level = f.grey->level.row(y);
    const std::uint8_t* label = f.labels.row(y);
    const float* relative = f.relative.row(y);
    for (int x = 0; x < e.width; ++x) {
      if (relative[x] == 0.0F) continue;
      const int a = label[x];
      const double p = static_cast<double>(relative[x]) * precision[label[x]];
      const double target =
          nx[static_cast<std::size_t>(x)] * ny[static_cast<std::size_t>(y)] * level[x];
      row.target += p * target * target;
      row.observed += 1.0;
      if (windows.one(x)) {
        row.square(a, a) += p;
        row.product[label[x]] += p * target;
        continue;
      }
      fill_shares(f, x, y, shares);
      for (std::size_t i = 0; i < shares.count; ++i) {
        const std::size_t k = shares.present[i];
        const double pk = p * shares.value[k];
        row.product[k] += pk * target;
        for (std::size_t j = 0; j < shares.count; ++j) {
          const std::size_t l = shares.present[j];
          row.square(static_cast<int>(k), static_cast<int>(l)) += pk * shares.value[l];
        }
      }
    }
    for (std::size_t i = 0; i < row.square.value.size(); ++i) {
      all.square.value[i] += row.square.value[i];
    }
    for (std::size_t k = 0; k < classes; ++k) all.product[k] += row.product[k];
    all.target += row.target;
    all.observed += row.observed;
  }
  return all;
}

void draw_blurred_classes(const GaussianPrior& prior, RandomStream& random, const BlurredField& f,
                          GaussianClasses& classes) {
  const std::size_t count = classes.mean.size();
  const LevelClasses now = level_classes(*f.grey, classes);
  const double step = f.grey->step;
  const double m0 = (prior.mean - f.grey->origin) / step;
  const double s0 = prior.variance / (step * step);
  const ResidualSums sums = sum_residuals(f, count);
  std::vector<double> precision(count);
  double all_shape = 0.5 * prior.nu, all_scale = 0.5 * prior.nu * s0;
  for (std::size_t k = 0; k < count; ++k) {
    const double shift = now.mean[k] - m0;
    const double shape = 0.5 * (sums.observed[k] + 1.0);
    const double scale = 0.5 * (sums.squares[k] + prior.kappa * shift * shift);
    all_shape += shape;
    all_scale += scale;
    if (classes.shared_variance) continue;
    precision[k] = random.gamma(0.5 * prior.nu + shape) / (0.5 * prior.nu * s0 + scale);
  }
  if (classes.shared_variance) {
    std::fill(precision.begin(), precision.end(), random.gamma(all_shape) / all_scale);
  }

  BlurredRegression fit = regress_on_classes(precision, f);
  for (std::size_t k = 0; k < count; ++k) {
    const int i = static_cast<int>(k);
    fit.square(i, i) += prior.kappa * precision[k];
    fit.product[k] += prior.kappa * precision[k] * m0;
  }
  // A = L L': mean A^-1 b = L^-T (L^-1 b), and L^-T xi has covariance A^-1.
  const SquareMatrix inverse = lower_inverse(cholesky(fit.square));
  std::vector<double> whitened(count, 0.0), mean(count, 0.0);
  for (std::size_t i = 0; i < count; ++i) {
    for (std::size_t j = 0; j <= i; ++j) {
      whitened[i] += inverse(static_cast<int>(i), static_cast<int>(j)) * fit.product[j];
    }
    whitened[i] += random.normal();
  }
  for (std::size_t i = 0; i < count; ++i) {
    for (std::size_t j = i; j < count; ++j) {
      mean[i] += inverse(static_cast<int>(j), static_cast<int>(i)) * whitened[j];
    }
  }
  for (std::size_t k = 0; k < count; ++k) classes.sd[k] = step / std::sqrt(precision[k]);
  if (!std::is_sorted(mean.begin(), mean.end())) return;
  for (std::size_t k = 0; k < count; ++k) classes.mean[k] = f.grey->origin + step * mean[k];
}

}  // namespace stillfield
