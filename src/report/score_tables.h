// The tables of `score`: how results agree with a known truth.
//
// score.csv    tidy: image, page, class, score, value. Of a segmentation: misclassified, brier,
//              calibration_error, dice (a class), area_fraction_error (a class), area_fraction
//              covered90 and covered95 (1 or 0); of a restoration: psnr, ssim, rmse, mean_error,
//              coverage90, coverage90_at_edges, mean_width90
// score.json   the same with confusion matrices and reliability tables, and the means over images
#ifndef STILLFIELD_REPORT_SCORE_TABLES_H_
#define STILLFIELD_REPORT_SCORE_TABLES_H_

#include <optional>
#include <string>
#include <vector>

#include "measure/intensity_scores.h"
#include "measure/label_scores.h"

namespace stillfield {

// A measurement of the record beside its true value.
struct MeasurementScore {
  std::string name;
  int label = 0;
  double estimate = 0;
  double truth = 0;
  bool covered90 = false;
  bool covered95 = false;
};

struct ImageScore {
  std::string image;
  int page = 1;
  std::optional<LabelScores> labels;
  std::optional<IntensityScores> intensities;
  std::vector<MeasurementScore> measurements;
};

// One number of an image, or its mean over all images.
struct ScoreValue {
  std::string score;
  int label = 0;
  double value = 0;
};

// In the order of the table.
std::vector<ScoreValue> score_values(const ImageScore& image);

// Means over the images that have the value.
std::vector<ScoreValue> mean_scores(const std::vector<ImageScore>& images);

std::string score_csv(const std::vector<ImageScore>& images);
std::string score_text(const std::vector<ImageScore>& images);

}  // namespace stillfield

#endif  // STILLFIELD_REPORT_SCORE_TABLES_H_
