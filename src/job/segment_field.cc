#include "job/segment_field.h"

#include <algorithm>

#include "image/read.h"
#include "image/write.h"
#include "job/field_frame.h"
#include "job/field_record.h"
#include "job/label_draws.h"
#include "job/model_checks.h"
#include "job/output_folder.h"
#include "job/restore_one.h"
#include "report/class_colours.h"
#include "simd/target.h"

namespace stillfield {
namespace {

namespace fs = std::filesystem;

constexpr float kCertain = 0.9F;  // pixels whose largest probability is smaller are uncertain

double share_below(const std::vector<Volume<float>>& probability, float limit) {
  const Extent extent = probability.front().extent();
  std::int64_t below = 0;
  for (int y = 0; y < extent.height; ++y) {
    for (int x = 0; x < extent.width; ++x) {
      float largest = 0;
      for (const Volume<float>& p : probability) largest = std::max(largest, p.at(x, y));
      below += largest < limit ? 1 : 0;
    }
  }
  return static_cast<double>(below) / static_cast<double>(extent.sites());
}

void write_preview(const fs::path& file, const Volume<std::uint8_t>& labels, int classes) {
  Volume<std::uint8_t> red(labels.extent());
  Volume<std::uint8_t> green(labels.extent());
  Volume<std::uint8_t> blue(labels.extent());
  for (int y = 0; y < labels.height(); ++y) {
    for (int x = 0; x < labels.width(); ++x) {
      const Rgb colour = class_colour(labels.at(x, y), classes);
      red.at(x, y) = colour.red;
      green.at(x, y) = colour.green;
      blue.at(x, y) = colour.blue;
    }
  }
  write_png(file, {red.view(), green.view(), blue.view()});
}

void write_maps(const FieldTask& task, const LabelSampling& sampling, int classes,
                const TiffOptions& options, ImageRecord& record) {
  const LabelCounts& counts = *sampling.counts;
  const auto finished = [&](const std::string& suffix) { list_output(task, suffix, record); };
  {
    const Volume<std::uint8_t> labels = counts.most_probable();
    write_tiff(with_suffix(task.stem, ".labels.tif"), labels.view(), options);
    finished(".labels.tif");
    write_preview(with_suffix(task.stem, ".labels.png"), labels, classes);
    finished(".labels.png");
  }
  {
    std::vector<Volume<float>> probability;
    std::vector<TiffPage<float>> pages;
    for (int k = 0; k < classes; ++k) probability.push_back(counts.probability(k));
    for (int k = 0; k < classes; ++k) {
      pages.push_back(
          {probability[static_cast<std::size_t>(k)].view(), "class " + std::to_string(k + 1)});
    }
    write_tiff(with_suffix(task.stem, ".probability.tif"), pages, options);
    finished(".probability.tif");
    record.probability.uncertain_share = share_below(probability, kCertain);
  }
  write_tiff(with_suffix(task.stem, ".entropy.tif"), counts.entropy().view(), options);
  finished(".entropy.tif");
}

ImageRecord segment(const FieldTask& task, const SegmentSettings& settings, const RunSettings& run,
                    const Pool& pool, JobObserver& observer, LogPartitionMemo& memo) {
  ImageRecord record;
  Stopwatch watch;
  GreyLevels grey;
  TiffOptions options;
  std::uint64_t seed = 0;
  {
    const Field field = read_page(task.file, task.page, run.limits);
    grey = make_grey_levels(field.pixels.view());
    seed = begin_record(task, field, kSegment, named_settings(settings), settings.seed, record);
    options.pixel_size_um = field.pixel_size_um;
  }
  describe_grey(grey, record);
  record.run = {active_cpu_target(), pool.threads(), watch.lap(), 0, 0};

  LabelSampling sampling = restore_one(grey, settings, seed, pool, observer, &memo);
  describe_sampling(sampling, settings, record);
  const int draws = draws_for_checks(settings.chains);
  PredictiveChecks checks(grey, settings.chains, draws, seed);
  for_label_draws(settings, draws, pool, observer, sampling, [&](const LabelDraw& d) {
    checks.show(d.chain, d.draw, d.labels, d.model.classes);
  });
  record.run.sample_seconds = watch.lap();

  const fs::path record_file = with_suffix(task.stem, kRecordSuffix);
  fs::remove(record_file);  // from here to the end there is no finished result
  write_maps(task, sampling, settings.classes, options, record);
  describe_checks(grey, sampling, checks, record);
  record.run.write_seconds = watch.lap();
  write_record(record_file, record);
  return record;
}

}  // namespace

ImageRecord segment_field(const FieldTask& task, const SegmentSettings& settings,
                          const RunSettings& run, const Pool& pool, JobObserver& observer,
                          LogPartitionMemo& memo) {
  return with_file_named(task, [&] { return segment(task, settings, run, pool, observer, memo); });
}

}  // namespace stillfield
