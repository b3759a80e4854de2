#include "job/segment_field.h"

#include <algorithm>
#include <cmath>
#include <limits>

#include "image/atomic_file.h"
#include "image/write.h"
#include "job/bootstrap.h"
#include "job/choose_classes.h"
#include "job/field_frame.h"
#include "job/field_record.h"
#include "job/label_draws.h"
#include "job/measured_draws.h"
#include "job/model_checks.h"
#include "job/output_folder.h"
#include "job/restore_blurred.h"
#include "job/restore_shaded.h"
#include "job/segment_input.h"
#include "job/unfinished_result.h"
#include "report/class_colours.h"
#include "report/particle_csv.h"
#include "simd/target.h"

namespace stillfield {
namespace {

namespace fs = std::filesystem;

constexpr float kCertain = 0.9F;  // pixels whose largest probability is smaller are uncertain

constexpr float kNotMapped = std::numeric_limits<float>::quiet_NaN();

// Sets what lies outside the region of interest.
template <class T>
void blank_outside(const Volume<std::uint8_t>& usable, T value, Volume<T>& map) {
  for (int y = 0; y < usable.height(); ++y) {
    for (int x = 0; x < usable.width(); ++x) {
      if (usable.at(x, y) == 0) map.at(x, y) = value;
    }
  }
}

// Of the pixels that are mapped.
double share_below(const std::vector<Volume<float>>& probability, float limit) {
  const Extent extent = probability.front().extent();
  std::int64_t mapped = 0;
  std::int64_t below = 0;
  for (int y = 0; y < extent.height; ++y) {
    for (int x = 0; x < extent.width; ++x) {
      if (std::isnan(probability.front().at(x, y))) continue;
      ++mapped;
      float largest = 0;
      for (const Volume<float>& p : probability) largest = std::max(largest, p.at(x, y));
      below += largest < limit ? 1 : 0;
    }
  }
  return static_cast<double>(below) / static_cast<double>(mapped);
}

void write_preview(const fs::path& file, const Volume<std::uint8_t>& labels, int classes) {
  Volume<std::uint8_t> red(labels.extent());
  Volume<std::uint8_t> green(labels.extent());
  Volume<std::uint8_t> blue(labels.extent());
  for (int y = 0; y < labels.height(); ++y) {
    for (int x = 0; x < labels.width(); ++x) {
      const int label = labels.at(x, y);
      const Rgb colour = label == 0 ? Rgb{} : class_colour(label, classes);
      red.at(x, y) = colour.red;
      green.at(x, y) = colour.green;
      blue.at(x, y) = colour.blue;
    }
  }
  write_png(file, {red.view(), green.view(), blue.view()});
}

void write_maps(const FieldTask& task, const LabelSampling& sampling, const SegmentInput& input,
                ImageRecord& record) {
  const LabelCounts& counts = *sampling.counts;
  const int classes = input.measure.classes;
  const TiffOptions& options = input.options;
  const auto finished = [&](const std::string& suffix) { list_output(task, suffix, record); };
  {
    Volume<std::uint8_t> labels = counts.most_probable();
    blank_outside(input.usable, std::uint8_t{0}, labels);
    write_tiff(with_suffix(task.stem, ".labels.tif"), labels.view(), options);
    finished(".labels.tif");
    write_preview(with_suffix(task.stem, ".labels.png"), labels, classes);
    finished(".labels.png");
  }
  {
    std::vector<Volume<float>> probability;
    std::vector<TiffPage<float>> pages;
    for (int k = 0; k < classes; ++k) {
      probability.push_back(counts.probability(k));
      blank_outside(input.usable, kNotMapped, probability.back());
    }
    for (int k = 0; k < classes; ++k) {
      pages.push_back(
          {probability[static_cast<std::size_t>(k)].view(), "class " + std::to_string(k + 1)});
    }
    write_tiff(with_suffix(task.stem, ".probability.tif"), pages, options);
    finished(".probability.tif");
    record.probability.uncertain_share = share_below(probability, kCertain);
  }
  Volume<float> entropy = counts.entropy();
  blank_outside(input.usable, kNotMapped, entropy);
  write_tiff(with_suffix(task.stem, ".entropy.tif"), entropy.view(), options);
  finished(".entropy.tif");
}

ImageRecord segment(const FieldTask& task, const SegmentSettings& asked, const RunSettings& run,
                    const Pool& pool, JobObserver& observer, LogPartitionMemo& memo) {
  ImageRecord record;
  Stopwatch watch;
  SegmentInput input = read_segment_input(task, asked, run.limits, record);
  record.run = {active_cpu_target(), pool.threads(), watch.lap(), 0, 0};

  UnevenLight light(asked.shading, input.grey, input.pixels.view(), asked.classes);
  const SegmentSettings settings =
      with_chosen_classes(light.even_grey(), asked, input.seed, pool, record);
  input.measure.classes = settings.classes;
  LabelSampling sampling = light.restore(settings, input.seed, pool, observer, &memo);
  restore_blurred(settings, pool, observer, sampling);
  describe_sampling(sampling, settings, record);
  describe_light(light.facts(), record);
  add_choice_sentences(record);
  MeasuredDraws measured(sampling.counts->most_probable().view(), light.even_pixels(),
                         input.usable.view(), input.measure, settings.chains);
  PredictiveChecks checks(input.grey, settings.chains, kMeasuredDraws, input.seed,
                          light.modelled() ? &light.surface() : nullptr);
  for_label_draws(settings, kMeasuredDraws, pool, observer, sampling, [&](const LabelDraw& draw) {
    measured.record(draw);
    checks.show(draw.chain, draw.draw, draw.labels, draw.model.classes);
  });
  describe_measured(measured.measurements(), input.complete(), record);
  if (settings.replicates > 0) {
    Bootstrap bootstrap = run_bootstrap({light.even_grey(), light.even_pixels(),
                                         input.usable.view(), input.measure, settings, input.seed},
                                        pool, observer, record.measurements, sampling);
    correct_measurements(bootstrap, record.measurements);
    record.bootstrap = bootstrap.facts;
  }
  record.run.sample_seconds = watch.lap();

  const fs::path record_file = with_suffix(task.stem, kRecordSuffix);
  const UnfinishedResult unfinished(task.stem, record);
  write_maps(task, sampling, input, record);
  if (light.modelled()) {
    write_tiff(with_suffix(task.stem, ".shading.tif"), light.surface().view(), input.options);
    list_output(task, ".shading.tif", record);
  }
  describe_checks(input.grey, input.usable, sampling, checks, record);
  write_text_atomically(
      with_suffix(task.stem, kParticlesSuffix),
      particles_csv(record.input, input.measure.pixel_size_um, measured.particles()));
  list_output(task, kParticlesSuffix, record);
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
