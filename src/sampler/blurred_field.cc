#include "sampler/blurred_field.h"

#include <algorithm>
#include <cmath>

#include "core/elementary.h"
#include "core/error.h"
#include "simd/label_band.h"

namespace stillfield {
namespace {

// out(x, y) = sum_j k(j) sum_i k(i) in(x + i, y + j) for pixels inside the image; `fill(y, row)`
// writes a row of the input, x from 0; outside the image the input is zero. A ring of 2 R + 1 rows
// holds what has been summed along x.
template <class Fill, class Take>
void convolve(const Extent& e, int radius, const std::vector<float>& k, const Fill& fill,
              const Take& take) {
  const int window = 2 * radius + 1;
  const auto width = static_cast<std::size_t>(e.width);
  std::vector<float> in(width + 2 * static_cast<std::size_t>(radius), 0.0F);
  std::vector<float> ring(width * static_cast<std::size_t>(window), 0.0F);
  std::vector<float> out(width);
  const auto ring_row = [&](int y) {
    return ring.data() + width * static_cast<std::size_t>((y + window) % window);
  };
  for (int y = 0; y < e.height + radius; ++y) {
    float* sums = ring_row(y);
    std::fill(sums, sums + width, 0.0F);
    if (y < e.height) {
      fill(y, in.data() + radius);
      for (int i = 0; i < window; ++i) {
        const float f = k[static_cast<std::size_t>(i)];
        const float* from = in.data() + i;
        for (std::size_t x = 0; x < width; ++x) sums[x] += f * from[x];
      }
    }
    const int done = y - radius;
    if (done < 0) continue;
    std::fill(out.begin(), out.end(), 0.0F);
    for (int j = -radius; j <= radius; ++j) {
      if (done + j < 0) continue;
      const float f = k[static_cast<std::size_t>(j + radius)];
      const float* from = ring_row(done + j);
      for (std::size_t x = 0; x < width; ++x) out[x] += f * from[x];
    }
    take(done, out.data());
  }
}

std::vector<float> as_floats(const std::vector<double>& v) {
  return {v.begin(), v.end()};
}

// ln p(y | z) of one row, up to a constant.
class LogDensity {
 public:
  explicit LogDensity(const LevelClasses& classes) : precision_(classes.precision) {
    for (const double p : precision_) log_scale_.push_back(0.5 * exact_log(p));
  }
  double row(const BlurredField& field, int y, const float* relative, const float* residual) const {
    const std::uint8_t* label = field.labels.row(y);
    double sum = 0.0;
    for (int x = 0; x < field.labels.extent().width; ++x) {
      if (relative[x] == 0.0F) continue;
      const double r = static_cast<double>(residual[x]);
      sum += log_scale_[label[x]] -
             0.5 * static_cast<double>(relative[x]) * precision_[label[x]] * r * r;
    }
    return sum;
  }

 private:
  std::vector<double> precision_, log_scale_;
};

std::vector<float> squares(const std::vector<double>& v) {
  std::vector<float> out;
  for (const double h : v) out.push_back(static_cast<float>(h * h));
  return out;
}

}  // namespace

LevelClasses level_classes(const GreyLevels& grey, const GaussianClasses& classes) {
  LevelClasses out;
  for (std::size_t k = 0; k < classes.mean.size(); ++k) {
    out.mean.push_back((classes.mean[k] - grey.origin) / grey.step);
    const double sd = classes.sd[k] / grey.step;
    out.precision.push_back(1.0 / (sd * sd));
  }
  return out;
}

BlurredField open_blurred_field(const GreyLevels& grey, const BlurKernel& kernel,
                                const Volume<float>& weight) {
  const Extent e = grey.level.extent();
  if (e.depth != 1) throw Error(ErrorKind::kUsage, "blur is modelled in planes, not in volumes");
  BlurredField field;
  field.grey = &grey;
  field.labels = PaddedPlane<std::uint8_t>(e);
  field.relative = PaddedPlane<float>(e);
  field.residual = PaddedPlane<float>(e);
  field.slope = PaddedPlane<float>(e);
  field.curvature = PaddedPlane<float>(e);
  constexpr int m = PaddedPlane<std::uint8_t>::kMargin;
  for (int y = -m; y < e.height + m; ++y) {
    std::fill(field.labels.row(y) - m, field.labels.row(y) + e.width + m, kGuardLabel);
    if (y >= 0 && y < e.height) std::fill_n(field.labels.row(y), e.width, std::uint8_t{0});
  }
  set_blur(kernel, weight, field);
  return field;
}

void set_blur(const BlurKernel& kernel, const Volume<float>& weight, BlurredField& field) {
  field.kernel = kernel;
  const Extent e = field.labels.extent();
  const std::vector<double> nx = kernel.inside(e.width), ny = kernel.inside(e.height);
  for (int y = 0; y < e.height; ++y) {
    const std::uint16_t* level = field.grey->level.row(y);
    float* out = field.relative.row(y);
    for (int x = 0; x < e.width; ++x) {
      const double n = nx[static_cast<std::size_t>(x)] * ny[static_cast<std::size_t>(y)];
      const double w = weight.empty() ? 1.0 : static_cast<double>(weight.at(x, y));
      out[x] = level[x] == field.grey->missing() ? 0.0F : static_cast<float>(w / (n * n));
    }
  }
}

void set_labels(View<const std::uint8_t> labels, BlurredField& field) {
  for (int y = 0; y < labels.height(); ++y) {
    std::copy_n(labels.row(y), labels.width(), field.labels.row(y));
  }
}

void get_labels(const BlurredField& field, View<std::uint8_t> labels) {
  for (int y = 0; y < labels.height(); ++y) {
    std::copy_n(field.labels.row(y), labels.width(), labels.row(y));
  }
}

void refresh_residual(const LevelClasses& classes, BlurredField& field) {
  const Extent e = field.labels.extent();
  const std::vector<float> mean = as_floats(classes.mean);
  const std::vector<double> nx = field.kernel.inside(e.width), ny = field.kernel.inside(e.height);
  convolve(
      e, field.kernel.radius, as_floats(field.kernel.value),
      [&](int y, float* row) {
        const std::uint8_t* label = field.labels.row(y);
        for (int x = 0; x < e.width; ++x) row[x] = mean[label[x]];
      },
      [&](int y, const float* blurred) {
        const std::uint16_t* level = field.grey->level.row(y);
        float* out = field.residual.row(y);
        const double n = ny[static_cast<std::size_t>(y)];
        for (int x = 0; x < e.width; ++x) {
          const double scaled = n * nx[static_cast<std::size_t>(x)] * level[x];
          out[x] = static_cast<float>(scaled - static_cast<double>(blurred[x]));
        }
      });
}

void refresh_blurred_field(const LevelClasses& classes, BlurredField& field) {
  refresh_residual(classes, field);
  const Extent e = field.labels.extent();
  const std::vector<float> precision = as_floats(classes.precision);
  const auto weigh = [&](int y, float* row) {
    const std::uint8_t* label = field.labels.row(y);
    const float* relative = field.relative.row(y);
    for (int x = 0; x < e.width; ++x) row[x] = relative[x] * precision[label[x]];
  };
  convolve(
      e, field.kernel.radius, as_floats(field.kernel.value),
      [&](int y, float* row) {
        weigh(y, row);
        const float* residual = field.residual.row(y);
        for (int x = 0; x < e.width; ++x) row[x] *= residual[x];
      },
      [&](int y, const float* sums) { std::copy_n(sums, e.width, field.slope.row(y)); });
  convolve(e, field.kernel.radius, squares(field.kernel.value), weigh,
           [&](int y, const float* s) { std::copy_n(s, e.width, field.curvature.row(y)); });
}

double log_likelihood(const LevelClasses& classes, const BlurredField& field) {
  const LogDensity density(classes);
  double total = 0.0;
  for (int y = 0; y < field.labels.extent().height; ++y) {
    total += density.row(field, y, field.relative.row(y), field.residual.row(y));
  }
  return total;
}

double log_likelihood_under(const BlurKernel& kernel, const LevelClasses& classes,
                            const BlurredField& field) {
  const Extent e = field.labels.extent();
  const LogDensity density(classes);
  const std::vector<float> mean = as_floats(classes.mean);
  const std::vector<double> nx = kernel.inside(e.width), ny = kernel.inside(e.height);
  const std::vector<double> old_x = field.kernel.inside(e.width);
  const std::vector<double> old_y = field.kernel.inside(e.height);
  const auto width = static_cast<std::size_t>(e.width);
  std::vector<float> relative(width), residual(width);
  double total = 0.0;
  convolve(
      e, kernel.radius, as_floats(kernel.value),
      [&](int y, float* row) {
        const std::uint8_t* label = field.labels.row(y);
        for (int x = 0; x < e.width; ++x) row[x] = mean[label[x]];
      },
      [&](int y, const float* blurred) {
        const std::uint16_t* level = field.grey->level.row(y);
        const float* old = field.relative.row(y);
        const auto v = static_cast<std::size_t>(y);
        for (std::size_t x = 0; x < width; ++x) {
          const double n = ny[v] * nx[x], ratio = old_y[v] * old_x[x] / n;
          relative[x] = static_cast<float>(static_cast<double>(old[x]) * ratio * ratio);
          residual[x] = static_cast<float>(n * level[x] - static_cast<double>(blurred[x]));
        }
        total += density.row(field, y, relative.data(), residual.data());
      });
  return total;
}

}  // namespace stillfield
