#include "model/camera_fit.h"

#include <algorithm>
#include <charconv>
#include <cmath>
#include <string>

#include "core/error.h"
#include "model/noise_quantile.h"

namespace stillfield {
namespace {

constexpr double kOutlier = 6.0;
constexpr double kMadToSd = 1.4826;

double cube(double x) {
  return x * x * x;
}

// The point z standard deviations up of chi^2_k / k (Wilson & Hilferty 1931).
double chi_square_point(double k, double z) {
  const double t = 2.0 / (9.0 * k);
  return cube(1.0 - t + z * std::sqrt(t));
}

std::vector<double> values_of(const Volume<double>& v) {
  std::vector<double> out;
  for (int y = 0; y < v.height(); ++y) out.insert(out.end(), v.row(y), v.row(y) + v.width());
  return out;
}

std::string text_of(double value) {
  char buffer[32];
  const std::to_chars_result end = std::to_chars(buffer, buffer + sizeof(buffer), value);
  return {buffer, end.ptr};
}

struct Line {
  double slope = 0.0, error = 0.0;
};

// var - dark = gain (mean - offset): weighted, through the dark point. The error is enlarged when
// the levels scatter more than the sampling errors of their variances.
Line fit_gain(const std::vector<CameraLevel>& levels, double offset, double dark_variance) {
  double xx = 0.0, xv = 0.0, chi = 0.0;
  int n = 0;
  for (const CameraLevel& l : levels) {
    if (!l.used) continue;
    const double w = 1.0 / (l.variance_error * l.variance_error);
    xx += w * (l.mean - offset) * (l.mean - offset);
    xv += w * (l.mean - offset) * (l.variance - dark_variance);
    ++n;
  }
  Line line{xv / xx, std::sqrt(1.0 / xx)};
  for (const CameraLevel& l : levels) {
    if (!l.used) continue;
    const double r =
        (l.variance - dark_variance - line.slope * (l.mean - offset)) / l.variance_error;
    chi += r * r;
  }
  if (n > 1) line.error *= std::sqrt(std::max(chi / (n - 1.0), 1.0));
  return line;
}

double linearity(const std::vector<CameraLevel>& levels, double offset) {
  double n = 0.0, x = 0.0, y = 0.0, xx = 0.0, xy = 0.0, top = 0.0;
  for (const CameraLevel& l : levels) {
    if (!l.used) continue;
    n += 1.0;
    x += l.level;
    y += l.mean;
    top = std::max(top, l.mean - offset);
  }
  if (n < 3.0) return std::numeric_limits<double>::quiet_NaN();
  for (const CameraLevel& l : levels) {
    if (!l.used) continue;
    xx += (l.level - x / n) * (l.level - x / n);
    xy += (l.level - x / n) * (l.mean - y / n);
  }
  double worst = 0.0;
  for (const CameraLevel& l : levels) {
    if (l.used) {
      worst = std::max(worst, std::fabs(l.mean - y / n - xy / xx * (l.level - x / n)));
    }
  }
  return 100.0 * worst / top;
}

}  // namespace

void CameraFit::check_size(View<const float> frame) {
  if (extent_.width == 0) extent_ = frame.extent();
  if (frame.extent() != extent_ || frame.depth() != 1) {
    throw Error(ErrorKind::kInput, "the frames of a camera must all have one size; one is " +
                                       std::to_string(frame.width()) + " x " +
                                       std::to_string(frame.height()) + ", the first was " +
                                       std::to_string(extent_.width) + " x " +
                                       std::to_string(extent_.height));
  }
}

void CameraFit::add_dark(View<const float> frame) {
  check_size(frame);
  if (!flats_.empty()) {
    throw Error(ErrorKind::kUsage, "dark frames must be given before the flat frames");
  }
  if (dark_frames_ == 0) {
    dark_mean_ = Volume<double>(extent_);
    dark_square_ = Volume<double>(extent_);
  }
  ++dark_frames_;
  for (int y = 0; y < extent_.height; ++y) {
    for (int x = 0; x < extent_.width; ++x) {
      const double d = frame.at(x, y) - dark_mean_.at(x, y);
      dark_mean_.at(x, y) += d / dark_frames_;
      dark_square_.at(x, y) += d * (frame.at(x, y) - dark_mean_.at(x, y));
    }
  }
}

void CameraFit::find_hot_pixels() {
  if (dark_frames_ < 2) {
    throw Error(ErrorKind::kInput,
                "a camera needs at least two dark frames, to tell its read noise; " +
                    std::to_string(dark_frames_) + " given");
  }
  const double k = dark_frames_ - 1.0;
  std::vector<double> mean = values_of(dark_mean_), variance = values_of(dark_square_);
  const double centre = sample_median(mean);
  for (double& m : mean) m = std::fabs(m - centre);
  const double typical = sample_median(variance) / k / chi_square_point(k, 0.0);
  const double spread = std::max(kMadToSd * sample_median(mean), std::sqrt(typical / dark_frames_));
  const double limit = typical * chi_square_point(k, kOutlier);
  hot_ = Volume<std::uint8_t>(extent_);
  double sum = 0.0, square = 0.0, n = 0.0;
  for (int y = 0; y < extent_.height; ++y) {
    for (int x = 0; x < extent_.width; ++x) {
      const double v = dark_square_.at(x, y) / k;
      const bool hot = std::fabs(dark_mean_.at(x, y) - centre) > kOutlier * spread ||
                       (typical > 0.0 && v > limit);
      hot_.at(x, y) = hot;
      hot_pixels_ += hot;
      if (hot) continue;
      sum += dark_mean_.at(x, y);
      square += v;
      n += 1.0;
    }
  }
  offset_ = sum / n;
  dark_variance_ = square / n;
}

void CameraFit::add_flat(double level, View<const float> frame) {
  check_size(frame);
  if (hot_.empty()) find_hot_pixels();
  const auto same = [level](const Flats& f) { return f.level == level; };
  auto found = std::find_if(flats_.begin(), flats_.end(), same);
  if (found == flats_.end()) {
    // Frames come level by level: the last frame of the level before is not needed any more.
    if (!flats_.empty()) flats_.back().last = Volume<float>();
    flats_.emplace_back();
    found = flats_.end() - 1;
    found->level = level;
  }
  Flats& f = *found;
  const bool paired = !f.last.empty();
  double sum = 0.0, difference = 0.0, square = 0.0, n = 0.0;
  for (int y = 0; y < extent_.height; ++y) {
    for (int x = 0; x < extent_.width; ++x) {
      if (hot_.at(x, y) != 0) continue;
      const double v = frame.at(x, y);
      n += 1.0;
      sum += v;
      if (v > f.largest || (f.frames == 0 && n == 1.0)) {
        f.largest = v;
        f.at_largest = 0;
      }
      f.at_largest += v == f.largest;
      if (!paired) continue;
      const double d = v - f.last.at(x, y);
      difference += d;
      square += d * d;
    }
  }
  if (paired) f.square += 0.5 * (square - difference * difference / n);
  f.sum += sum / n;
  f.pixels = n;
  ++f.frames;
  if (!paired) f.last = Volume<float>(extent_);
  for (int y = 0; y < extent_.height; ++y) {
    std::copy_n(frame.row(y), extent_.width, f.last.row(y));
  }
}

CameraLevel CameraFit::level_of(const Flats& f, double cap) const {
  if (f.frames < 2) {
    throw Error(ErrorKind::kInput, "there is only one flat frame at level " + text_of(f.level) +
                                       "; give at least two at every level");
  }
  CameraLevel l;
  l.level = f.level;
  l.frames = f.frames;
  l.mean = f.sum / f.frames;
  const double pairs = f.frames - 1.0;
  l.variance = f.square / (pairs * (f.pixels - 1.0));
  // Differences that share a frame are correlated by -1/2, their squares by 1/4:
  // Var(mean square) = (2 / m) (1 + (m - 1) / (2 m)) a pixel, in units of its square.
  l.variance_error =
      l.variance * std::sqrt(2.0 / pairs * (1.0 + 0.5 * (pairs - 1.0) / pairs) / f.pixels);
  l.largest = f.largest;
  if (f.largest >= cap) {
    l.capped_share = static_cast<double>(f.at_largest) / (f.pixels * f.frames);
  }
  return l;
}

CameraModel CameraFit::fit(bool levels_are_exposures) const {
  if (flats_.empty()) {
    throw Error(ErrorKind::kInput,
                "a camera needs dark frames and flat frames; no flat frame was given");
  }
  CameraModel model;
  double cap = flats_.front().largest;
  for (const Flats& f : flats_) cap = std::max(cap, f.largest);
  for (const Flats& f : flats_) model.levels.push_back(level_of(f, cap));
  std::stable_sort(model.levels.begin(), model.levels.end(),
                   [](const CameraLevel& a, const CameraLevel& b) { return a.mean < b.mean; });
  const bool capped = std::any_of(model.levels.begin(), model.levels.end(),
                                  [](const CameraLevel& l) { return l.capped_share > kCapped; });
  if (capped) model.saturation = cap;
  const double top = capped ? cap : model.levels.back().mean;
  const double share = capped ? kFitShare : 1.0;
  int used = 0;
  for (CameraLevel& l : model.levels) {
    l.used = l.mean > offset_ && l.mean - offset_ <= share * (top - offset_) &&
             l.capped_share <= kCapped && l.variance > 0.0;
    used += l.used;
  }
  if (used == 0 && capped) {
    throw Error(ErrorKind::kInput, "all flat frames are saturated; give darker ones, up to " +
                                       std::to_string(static_cast<int>(100 * kFitShare)) +
                                       " % of saturation");
  }
  if (used == 0) {
    throw Error(ErrorKind::kInput, "the flat frames are no brighter than the dark frames");
  }
  const CameraLevel& last = *std::find_if(model.levels.rbegin(), model.levels.rend(),
                                          [](const CameraLevel& l) { return l.used; });
  const CameraLevel& first = *std::find_if(model.levels.begin(), model.levels.end(),
                                           [](const CameraLevel& l) { return l.used; });
  if (used < 2 || last.mean - first.mean < 0.01 * (last.mean - offset_)) {
    throw Error(ErrorKind::kInput,
                capped ? "only one level of the flat frames is not saturated; give darker ones too"
                       : "the flat frames are all at one level; give at least two levels of light");
  }
  const Line line = fit_gain(model.levels, offset_, dark_variance_);
  model.gain = line.slope;
  model.gain_error = line.error;
  const double pixels = flats_.front().pixels;
  model.offset = offset_;
  model.read_noise = std::sqrt(dark_variance_);
  model.read_noise_error = model.read_noise / std::sqrt(2.0 * pixels * (dark_frames_ - 1.0));
  model.offset_error = model.read_noise / std::sqrt(pixels * dark_frames_);
  if (levels_are_exposures) model.linearity_percent = linearity(model.levels, offset_);
  model.offset_map = Volume<float>(extent_);
  model.hot = Volume<std::uint8_t>(extent_);
  for (int y = 0; y < extent_.height; ++y) {
    for (int x = 0; x < extent_.width; ++x) {
      model.offset_map.at(x, y) = static_cast<float>(dark_mean_.at(x, y));
      model.hot.at(x, y) = hot_.at(x, y);
    }
  }
  model.hot_pixels = hot_pixels_;
  CameraLevel dark;
  dark.frames = dark_frames_;
  dark.mean = offset_;
  dark.variance = dark_variance_;
  dark.variance_error = 2.0 * model.read_noise * model.read_noise_error;
  model.levels.insert(model.levels.begin(), dark);
  return model;
}

}  // namespace stillfield
