#include "exactness/cosine_field.h"

#include <cmath>

namespace stillfield::exactness {
namespace {

std::vector<double> cosines(int n) {
  std::vector<double> m;
  for (int k = 0; k < n; ++k) {
    for (int i = 0; i < n; ++i) {
      m.push_back(std::sqrt((k == 0 ? 1.0 : 2.0) / n) * std::cos(M_PI * k * (i + 0.5) / n));
    }
  }
  return m;
}

}  // namespace

CosineField::CosineField(int width, int height)
    : width_(width), height_(height), along_x_(cosines(width)), along_y_(cosines(height)) {
  for (int j = 0; j < height; ++j) {
    for (int i = 0; i < width; ++i) {
      eigenvalue_.push_back(4.0 - 2.0 * std::cos(M_PI * i / width) -
                            2.0 * std::cos(M_PI * j / height));
    }
  }
}

// One direction after the other; `squared` sums squares of the factors (variances).
std::vector<double> CosineField::apply(const std::vector<double>& in, bool to_pixels,
                                       bool squared) const {
  const auto factor = [&](const Matrix& m, int n, int from, int to) {
    const int at = to_pixels ? from * n + to : to * n + from;
    const double f = m[static_cast<std::size_t>(at)];
    return squared ? f * f : f;
  };
  const auto at = [this](int i, int j) { return static_cast<std::size_t>(j * width_ + i); };
  std::vector<double> half(in.size()), out(in.size());
  for (int j = 0; j < height_; ++j) {
    for (int to = 0; to < width_; ++to) {
      for (int i = 0; i < width_; ++i) {
        half[at(to, j)] += factor(along_x_, width_, i, to) * in[at(i, j)];
      }
    }
  }
  for (int to = 0; to < height_; ++to) {
    for (int j = 0; j < height_; ++j) {
      const double f = factor(along_y_, height_, j, to);
      for (int i = 0; i < width_; ++i) out[at(i, to)] += f * half[at(i, j)];
    }
  }
  return out;
}

std::vector<double> CosineField::to_cosines(const std::vector<double>& x) const {
  return apply(x, false, false);
}

std::vector<double> CosineField::to_pixels(const std::vector<double>& c) const {
  return apply(c, true, false);
}

std::vector<double> CosineField::pixel_variances(const std::vector<double>& variance) const {
  return apply(variance, true, true);
}

std::vector<double> CosineField::draw(double lambda, RandomStream& random) const {
  std::vector<double> c(eigenvalue_.size());
  for (std::size_t k = 1; k < c.size(); ++k) {
    c[k] = random.normal() / std::sqrt(lambda * eigenvalue_[k]);
  }
  return to_pixels(c);
}

}  // namespace stillfield::exactness
