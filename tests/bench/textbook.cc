#include "bench/textbook.h"

#include <array>
#include <cmath>

namespace stillfield::bench {

Textbook::Textbook(const GreyLevels& grey, const LabelModel& model, int neighbours)
    : width_(grey.level.width()),
      height_(grey.level.height()),
      stride_(width_ + 2),
      classes_(model.size()),
      neighbours_(neighbours),
      beta_(model.prior.beta),
      model_(model) {
  for (const double sd : model.classes.sd) log_sd_.push_back(std::log(sd));
  for (int l = 0; l < grey.levels; ++l) {
    for (std::size_t k = 0; k < static_cast<std::size_t>(classes_); ++k) {
      const double d = (grey.value(l) - model.classes.mean[k]) / model.classes.sd[k];
      log_weight_.push_back(model.prior.alpha[k] - std::log(model.classes.sd[k]) - 0.5 * d * d);
    }
  }
  label_.assign(static_cast<std::size_t>(stride_) * static_cast<std::size_t>(height_ + 2), 255);
  std::uniform_int_distribution<int> any(0, classes_ - 1);
  for (int y = 0; y < height_; ++y) {
    for (int x = 0; x < width_; ++x) {
      level_.push_back(grey.level.at(x, y));
      value_.push_back(grey.value(level_.back()));
      label_[static_cast<std::size_t>((y + 1) * stride_ + x + 1)] =
          static_cast<std::uint8_t>(any(engine_));
    }
  }
  offset_ = {-1, 1, -stride_, stride_, -stride_ - 1, -stride_ + 1, stride_ - 1, stride_ + 1};
  offset_.resize(static_cast<std::size_t>(neighbours));
}

void Textbook::sweep() {
  sweep_classes([this](std::size_t pixel, std::size_t k) {
    const double d = (value_[pixel] - model_.classes.mean[k]) / model_.classes.sd[k];
    return model_.prior.alpha[k] - log_sd_[k] - 0.5 * d * d;
  });
}

void Textbook::sweep_tuned() {
  if (classes_ == 2) return sweep_two();
  sweep_classes([this](std::size_t pixel, std::size_t k) {
    return log_weight_[static_cast<std::size_t>(classes_) * level_[pixel] + k];
  });
}

int Textbook::equal_neighbours(const std::uint8_t* site, int k) const {
  int n = 0;
  for (int i = 0; i < neighbours_; ++i) n += site[offset_[static_cast<std::size_t>(i)]] == k;
  return n;
}

void Textbook::sweep_two() {
  std::uniform_real_distribution<double> uniform(0.0, 1.0);
  for (int y = 0; y < height_; ++y) {
    std::uint8_t* row = label_.data() + (y + 1) * stride_ + 1;
    const std::uint16_t* level = level_.data() + static_cast<std::ptrdiff_t>(y) * width_;
    for (int x = 0; x < width_; ++x) {
      const double* w = log_weight_.data() + 2 * level[x];
      const int n = equal_neighbours(row + x, 1) - equal_neighbours(row + x, 0);
      const double odds = std::exp(w[0] - w[1] - beta_ * n);
      row[x] = uniform(engine_) < 1.0 / (1.0 + odds) ? 1 : 0;
    }
  }
}

template <class LogWeight>
void Textbook::sweep_classes(const LogWeight& log_weight) {
  std::uniform_real_distribution<double> uniform(0.0, 1.0);
  std::array<double, 64> running{};
  std::size_t pixel = 0;
  for (int y = 0; y < height_; ++y) {
    std::uint8_t* row = label_.data() + (y + 1) * stride_ + 1;
    for (int x = 0; x < width_; ++x, ++pixel) {
      double sum = 0.0;
      for (int k = 0; k < classes_; ++k) {
        const auto c = static_cast<std::size_t>(k);
        sum += std::exp(log_weight(pixel, c) + beta_ * equal_neighbours(row + x, k));
        running[c] = sum;
      }
      const double target = uniform(engine_) * sum;
      int k = 0;
      while (k + 1 < classes_ && running[static_cast<std::size_t>(k)] <= target) ++k;
      row[x] = static_cast<std::uint8_t>(k);
    }
  }
}

}  // namespace stillfield::bench
