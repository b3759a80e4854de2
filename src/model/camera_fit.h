// The noise model of a camera from dark and evenly lit frames: photon transfer.
//
// Maths    mean_y = offset + gain e,  var_y = gain (mean_y - offset) + read_noise^2, e = electrons
//          temporal variance of a level: half the mean square of the differences of frames that
//          follow one another, each difference less its mean (drift of the lamp); fixed patterns of
//          the sensor cancel. EMVA Standard 1288 (formulas from memory); Janesick 2007
//          gain: weighted least squares through the dark point, over the levels up to kFitShare of
//          saturation, weights from the sampling error of a variance
//          saturation: the largest grey value, when at some level more than kCapped of the pixels
//          have it; none otherwise
//          hot pixels: dark mean further than 6 robust standard deviations from the median, or
//          dark variance beyond the 6-sigma point of its chi-squared distribution (Wilson &
//          Hilferty 1931). They take no part in the sums over a level
// Units    grey values of the files; gain in grey values an electron. read_noise holds the rounding
//          to whole grey values (1/12) as well: it is what one frame shows
// Order    all dark frames first, then flats; frames of one level one after the other
// Errors   Error(kInput): frames of different sizes, fewer than two dark frames or frames at a
// level,
//          flats all saturated, all at one level, or no brighter than the dark frames
#ifndef STILLFIELD_MODEL_CAMERA_FIT_H_
#define STILLFIELD_MODEL_CAMERA_FIT_H_

#include <cstdint>
#include <limits>
#include <optional>
#include <vector>

#include "core/volume.h"

namespace stillfield {

struct CameraLevel {
  double level = 0.0;  // the exposure as given; 0 for the dark frames
  int frames = 0;
  double mean = 0.0;
  double variance = 0.0;  // temporal
  double variance_error = 0.0;
  double largest = 0.0;       // grey value
  double capped_share = 0.0;  // pixels that have the camera's saturation value
  bool used = false;          // in the line
};

struct CameraModel {
  double gain = 0.0, gain_error = 0.0;
  double offset = 0.0, offset_error = 0.0;  // mean dark value
  double read_noise = 0.0, read_noise_error = 0.0;
  std::optional<double> saturation;
  // Largest deviation of the used levels' means from a line in the exposure, in percent of the
  // largest mean; NaN unless the levels are exposures and at least three are used.
  double linearity_percent = std::numeric_limits<double>::quiet_NaN();
  Volume<float> offset_map;  // mean dark value of each pixel
  Volume<std::uint8_t> hot;  // 1: hot
  std::int64_t hot_pixels = 0;
  std::vector<CameraLevel> levels;  // the dark frames, then by rising mean
};

class CameraFit {
 public:
  static constexpr double kFitShare = 0.7;
  static constexpr double kCapped = 0.001;

  void add_dark(View<const float> frame);
  void add_flat(double level, View<const float> frame);

  // levels_are_exposures: the levels are proportional to light, so that linearity can be judged.
  CameraModel fit(bool levels_are_exposures) const;

 private:
  struct Flats {
    double level = 0.0;
    int frames = 0;
    double sum = 0.0, square = 0.0;  // of means; of differences, halved
    double pixels = 0.0;             // regular ones
    double largest = 0.0;
    std::int64_t at_largest = 0;
    Volume<float> last;
  };

  void check_size(View<const float> frame);
  void find_hot_pixels();
  CameraLevel level_of(const Flats& flats, double cap) const;

  Extent extent_{0, 0, 1};
  int dark_frames_ = 0;
  Volume<double> dark_mean_, dark_square_;  // running mean and sum of squared deviations
  Volume<std::uint8_t> hot_;
  double offset_ = 0.0, dark_variance_ = 0.0;
  std::int64_t hot_pixels_ = 0;
  std::vector<Flats> flats_;
};

}  // namespace stillfield

#endif  // STILLFIELD_MODEL_CAMERA_FIT_H_
