#include "job/score_folder.h"

#include <algorithm>
#include <cmath>

#include "core/error.h"
#include "image/read.h"
#include "image/walk.h"
#include "job/output_folder.h"
#include "report/record.h"

namespace stillfield {
namespace {

namespace fs = std::filesystem;

void require_folder(const fs::path& folder) {
  if (fs::is_directory(folder)) return;
  throw Error(ErrorKind::kInput,
              folder.string() + ": there is no such folder; check the spelling of the path");
}

fs::path truth_file(const fs::path& truth, const std::string& relative) {
  const fs::path exact = truth / relative;
  if (fs::is_regular_file(exact)) return exact;
  std::vector<fs::path> alike;
  if (fs::is_directory(exact.parent_path())) {
    for (const auto& entry : fs::directory_iterator(exact.parent_path())) {
      if (entry.path().stem() == exact.stem() && has_image_extension(entry.path())) {
        alike.push_back(entry.path());
      }
    }
  }
  if (alike.size() == 1) return alike.front();
  throw Error(ErrorKind::kInput, exact.string() + ": there is " +
                                     (alike.empty() ? "no truth" : "more than one truth") +
                                     " for this image; add one file with this name");
}

Field read_truth(const fs::path& truth, const InputFacts& input) {
  const fs::path file = truth_file(truth, input.path);
  const int pages = count_pages(file);
  if (pages != 1 && pages != input.pages) {
    throw Error(ErrorKind::kInput, file.string() + ": has " + std::to_string(pages) +
                                       " pages and the image " + std::to_string(input.pages) +
                                       "; give a truth with as many pages");
  }
  Field field = read_page(file, pages == 1 ? 0 : input.page - 1);
  if (field.pixels.width() != input.width || field.pixels.height() != input.height) {
    throw Error(ErrorKind::kInput,
                file.string() + ": differs in size from the image; give a truth of its size");
  }
  return field;
}

void score_measurements(const ImageRecord& record, ImageScore& score) {
  for (const Measurement& m : record.measurements) {
    if (m.name != "area_fraction" || m.label < 1) continue;
    const double truth = score.labels->true_fraction[static_cast<std::size_t>(m.label - 1)];
    score.measurements.push_back({m.name, m.label, m.estimate, truth,
                                  m.lower90 <= truth && truth <= m.upper90,
                                  m.lower95 <= truth && truth <= m.upper95});
  }
}

void score_segmentation(const fs::path& stem, const ImageRecord& record, const Field& truth,
                        ImageScore& score) {
  const Field found = read_page(with_suffix(stem, ".labels.tif"));
  Volume<std::uint8_t> labels(found.pixels.extent());
  for (int y = 0; y < labels.height(); ++y) {
    for (int x = 0; x < labels.width(); ++x) {
      labels.at(x, y) = static_cast<std::uint8_t>(found.pixels.at(x, y));
    }
  }
  const fs::path file = with_suffix(stem, ".probability.tif");
  std::vector<Field> pages;
  std::vector<View<const float>> probability;
  for (int k = 0; k < count_pages(file); ++k) pages.push_back(read_page(file, k));
  for (const Field& page : pages) probability.push_back(page.pixels.view());
  score.labels = score_labels(labels.view(), probability, truth.pixels.view());
  score_measurements(record, score);
}

double peak_of(const Field& truth) {
  if (truth.format.kind == SampleKind::kUnsigned) return std::ldexp(1.0, truth.format.bits) - 1;
  float low = 0, high = 0;
  bool first = true;
  for (int y = 0; y < truth.pixels.height(); ++y) {
    for (int x = 0; x < truth.pixels.width(); ++x) {
      const float v = truth.pixels.at(x, y);
      if (std::isnan(v)) continue;
      low = first ? v : std::min(low, v);
      high = first ? v : std::max(high, v);
      first = false;
    }
  }
  return high > low ? double{high} - low : 1.0;
}

ImageScore score_image(const fs::path& stem, const fs::path& truth, std::optional<double> peak) {
  const ImageRecord record = read_record(with_suffix(stem, kRecordSuffix));
  ImageScore score;
  score.image = record.input.path;
  score.page = record.input.page;
  const Field field = read_truth(truth, record.input);
  if (record.command == kSegment) {
    score_segmentation(stem, record, field, score);
    return score;
  }
  const Field restored = read_page(with_suffix(stem, ".restored.tif"));
  const Field lower = read_page(with_suffix(stem, ".lower90.tif"));
  const Field upper = read_page(with_suffix(stem, ".upper90.tif"));
  score.intensities =
      score_intensities(restored.pixels.view(), lower.pixels.view(), upper.pixels.view(),
                        field.pixels.view(), peak.value_or(peak_of(field)));
  return score;
}

}  // namespace

FolderScore score_folder(const fs::path& results, const fs::path& truth,
                         std::optional<double> peak) {
  require_folder(results);
  require_folder(truth);
  const std::vector<fs::path> stems = record_stems(results);
  if (stems.empty()) {
    throw Error(ErrorKind::kInput, results.string() +
                                       ": holds no record of a result; give the folder that "
                                       "`segment` or `denoise` wrote");
  }
  FolderScore score;
  for (const fs::path& stem : stems) {
    try {
      score.images.push_back(score_image(stem, truth, peak));
    } catch (const Error& error) {
      const std::string sentence = error.what();
      const bool named = sentence.find(": ") != std::string::npos && sentence.front() == '/';
      score.failures.push_back(named ? sentence : stem.string() + ": " + sentence);
    }
  }
  write_if_changed(results / "score.csv", score_csv(score.images));
  write_if_changed(results / "score.json", score_text(score.images));
  return score;
}

}  // namespace stillfield
