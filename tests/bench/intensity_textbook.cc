#include "bench/intensity_textbook.h"

#include <cmath>

namespace stillfield::bench {

IntensityTextbook::IntensityTextbook(int width, int height, const std::vector<float>& value,
                                     double strength, double noise_variance)
    : width_(width),
      height_(height),
      stride_(width + 2),
      strength_(strength),
      noise_precision_(1.0 / noise_variance),
      value_(value.begin(), value.end()),
      field_(static_cast<std::size_t>(stride_) * static_cast<std::size_t>(height + 2)) {
  for (int y = 0; y < height; ++y) {
    for (int x = 0; x < width; ++x) {
      field_[static_cast<std::size_t>((y + 1) * stride_ + x + 1)] =
          value_[static_cast<std::size_t>(y * width + x)];
    }
  }
}

void IntensityTextbook::sweep() {
  std::normal_distribution<double> normal;
  for (int y = 0; y < height_; ++y) {
    double* row = field_.data() + (y + 1) * stride_ + 1;
    const double* value = value_.data() + static_cast<std::ptrdiff_t>(y) * width_;
    for (int x = 0; x < width_; ++x) {
      const int neighbours = (x > 0) + (x + 1 < width_) + (y > 0) + (y + 1 < height_);
      const double sum = row[x - 1] + row[x + 1] + row[x - stride_] + row[x + stride_];
      const double precision = strength_ * neighbours + noise_precision_;
      const double mean = (strength_ * sum + noise_precision_ * value[x]) / precision;
      row[x] = mean + normal(engine_) / std::sqrt(precision);
    }
  }
}

}  // namespace stillfield::bench
