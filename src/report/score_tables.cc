#include "report/score_tables.h"

#include <cmath>

#include "report/csv.h"
#include "report/json_archive.h"
#include "report/versions.h"

namespace stillfield {

template <class Archive>
void describe(Archive& archive, ReliabilityBin& bin) {
  archive("pixels", bin.pixels);
  archive("mean_probability", bin.mean_probability);
  archive("share_right", bin.share_right);
}

template <class Archive>
void describe(Archive& archive, ScoreValue& value) {
  archive("score", value.score);
  archive("class", value.label);
  archive("value", value.value);
}

template <class Archive>
void describe(Archive& archive, MeasurementScore& m) {
  archive("measurement", m.name);
  archive("class", m.label);
  archive("estimate", m.estimate);
  archive("truth", m.truth);
  archive("covered90", m.covered90);
  archive("covered95", m.covered95);
}

template <class Archive>
void describe(Archive& archive, ImageScore& image) {
  archive("image", image.image);
  archive("page", image.page);
  std::vector<ScoreValue> values = score_values(image);
  archive("scores", values);
  archive("measurements", image.measurements);
  if (!image.labels) return;
  archive("confusion", image.labels->confusion);
  std::vector<ReliabilityBin> bins(image.labels->reliability.begin(),
                                   image.labels->reliability.end());
  archive("reliability", bins);
}

std::vector<ScoreValue> score_values(const ImageScore& image) {
  std::vector<ScoreValue> values;
  if (image.labels) {
    const LabelScores& s = *image.labels;
    values.push_back({"misclassified", 0, s.misclassified});
    values.push_back({"brier", 0, s.brier});
    values.push_back({"calibration_error", 0, s.calibration_error});
    for (std::size_t k = 0; k < s.dice.size(); ++k) {
      values.push_back({"dice", static_cast<int>(k) + 1, s.dice[k]});
    }
  }
  if (image.intensities) {
    const IntensityScores& s = *image.intensities;
    values.push_back({"psnr", 0, s.psnr});
    values.push_back({"ssim", 0, s.ssim});
    values.push_back({"rmse", 0, s.rmse});
    values.push_back({"mean_error", 0, s.mean_error});
    values.push_back({"coverage90", 0, s.coverage90});
    values.push_back({"coverage90_at_edges", 0, s.coverage90_at_edges});
    values.push_back({"mean_width90", 0, s.mean_width90});
  }
  for (const MeasurementScore& m : image.measurements) {
    values.push_back({m.name + "_error", m.label, m.estimate - m.truth});
    values.push_back({m.name + "_covered90", m.label, m.covered90 ? 1.0 : 0.0});
    values.push_back({m.name + "_covered95", m.label, m.covered95 ? 1.0 : 0.0});
  }
  return values;
}

std::vector<ScoreValue> mean_scores(const std::vector<ImageScore>& images) {
  std::vector<ScoreValue> means;
  std::vector<double> counts;
  for (const ImageScore& image : images) {
    for (const ScoreValue& v : score_values(image)) {
      if (!std::isfinite(v.value)) continue;
      std::size_t at = 0;
      while (at < means.size() && (means[at].score != v.score || means[at].label != v.label)) ++at;
      if (at == means.size()) {
        means.push_back({v.score, v.label, 0});
        counts.push_back(0);
      }
      means[at].value += v.value;
      counts[at] += 1;
    }
  }
  for (std::size_t i = 0; i < means.size(); ++i) means[i].value /= counts[i];
  return means;
}

std::string score_csv(const std::vector<ImageScore>& images) {
  CsvTable table("image,page,class,score,value");
  for (const ImageScore& image : images) {
    for (const ScoreValue& v : score_values(image)) {
      table.start_row();
      table.add(image.image);
      table.add(std::int64_t{image.page});
      table.add(std::int64_t{v.label});
      table.add(v.score);
      table.add(v.value);
    }
  }
  return table.text();
}

std::string score_text(const std::vector<ImageScore>& images) {
  std::vector<ImageScore> list = images;
  std::vector<ScoreValue> means = mean_scores(images);
  JsonWriter writer;
  writer.constant("format", "stillfield score 1");
  writer.constant("program", kProgramName);
  std::string version = program_version();
  writer("version", version);
  writer("means", means);
  writer("images", list);
  return json_text(writer.take());
}

}  // namespace stillfield
