#include "job/denoise_field.h"

#include <algorithm>
#include <cmath>

#include "core/error.h"
#include "image/read.h"
#include "image/write.h"
#include "image/write_rounded.h"
#include "job/field_frame.h"
#include "job/mask.h"
#include "job/output_folder.h"
#include "job/preview.h"
#include "job/restore_plane.h"
#include "job/unfinished_result.h"
#include "simd/target.h"

namespace stillfield {
namespace {

namespace fs = std::filesystem;

constexpr const char* kColours[3] = {"red", "green", "blue"};

// The planes of one or three channels as one page.
template <class T>
TiffPage<T> page_of(const std::vector<Volume<T>>& planes, const std::string& name = {}) {
  TiffPage<T> page(planes.front().view(), name);
  for (std::size_t c = 1; c < planes.size(); ++c) page.further.push_back(planes[c].view());
  return page;
}

template <class T>
TiffPage<T> page_of(const std::vector<const Volume<T>*>& planes, const std::string& name = {}) {
  TiffPage<T> page(planes.front()->view(), name);
  for (std::size_t c = 1; c < planes.size(); ++c) page.further.push_back(planes[c]->view());
  return page;
}

void write_maps(const FieldTask& task, const std::vector<PlaneRestoration>& planes,
                const SampleFormat& format, const DenoiseSettings& settings,
                const TiffOptions& options, ImageRecord& record) {
  const auto write = [&](const std::string& suffix, Volume<float> PlaneRestoration::*map) {
    std::vector<const Volume<float>*> channels;
    for (const PlaneRestoration& plane : planes) channels.push_back(&(plane.*map));
    write_tiff(with_suffix(task.stem, suffix), std::vector<TiffPage<float>>{page_of(channels)},
               options);
    list_output(task, suffix, record);
  };
  if (settings.float_output || !keeps_integers(format)) {
    write(".restored.tif", &PlaneRestoration::restored);
  } else {
    std::vector<View<const float>> restored;
    for (const PlaneRestoration& plane : planes) restored.push_back(plane.restored.view());
    write_rounded_tiff(with_suffix(task.stem, ".restored.tif"), restored, format, options);
    list_output(task, ".restored.tif", record);
  }
  write(".sd.tif", &PlaneRestoration::sd);
  write(".lower90.tif", &PlaneRestoration::lower90);
  write(".upper90.tif", &PlaneRestoration::upper90);
  const bool impulses = std::all_of(planes.begin(), planes.end(),
                                    [](const PlaneRestoration& p) { return !p.impulse.empty(); });
  if (impulses) write(".impulses.tif", &PlaneRestoration::impulse);
  if (!planes.front().draws.empty()) {
    std::vector<TiffPage<float>> pages;
    for (std::size_t i = 0; i < planes.front().draws.size(); ++i) {
      std::vector<const Volume<float>*> channels;
      for (const PlaneRestoration& plane : planes) channels.push_back(&plane.draws[i]);
      pages.push_back(page_of(channels, "draw " + std::to_string(i + 1)));
    }
    write_tiff(with_suffix(task.stem, ".draws.tif"), pages, options);
    list_output(task, ".draws.tif", record);
  }
  std::vector<const Volume<float>*> restored;
  for (const PlaneRestoration& plane : planes) restored.push_back(&plane.restored);
  write_preview(with_suffix(task.stem, ".restored.png"), restored);
  list_output(task, ".restored.png", record);
}

// The noise level as a measurement of the image.
Measurement noise_measurement(const ChannelFacts& channel) {
  Measurement m;
  m.name = channel.channel == "grey" ? "noise_sd" : "noise_sd_" + channel.channel;
  m.unit = "grey value";
  m.estimate = channel.noise.middle_sd;
  m.plain_estimate = m.estimate;
  m.lower90 = channel.noise.middle_sd_lower90;
  m.upper90 = channel.noise.middle_sd_upper90;
  m.sd = (m.upper90 - m.lower90) / (2 * 1.645);
  return m;
}

void append_new(const std::vector<std::string>& from, std::vector<std::string>& to) {
  for (const std::string& text : from) {
    if (std::find(to.begin(), to.end(), text) == to.end()) to.push_back(text);
  }
}

void describe_planes(const std::vector<PlaneRestoration>& planes, ImageRecord& record) {
  record.restoration = planes.front().field;
  record.verdict.converged = true;
  for (const PlaneRestoration& plane : planes) {
    record.restoration.channels.push_back(plane.facts);
    record.measurements.push_back(noise_measurement(plane.facts));
    record.verdict.converged = record.verdict.converged && plane.converged;
    append_new(plane.sentences, record.verdict.sentences);
    append_new(plane.notes, record.input.notes);
  }
}

ImageRecord denoise(const FieldTask& task, const DenoiseSettings& settings, const RunSettings& run,
                    const Pool& pool, JobObserver& observer, const PatchMixture* mixture) {
  ImageRecord record;
  Stopwatch watch;
  Field field = read_page(task.file, task.page, run.limits, ColourMode::kSeparate);
  correct_light(settings.light, run.limits, field);
  const std::uint64_t seed =
      begin_record(task, field, kDenoise, named_settings(settings), settings.seed, record);
  const Volume<std::uint8_t> usable =
      read_mask(settings.mask, task, field.pixels.extent(), run.limits);
  record.run = {active_cpu_target(), pool.threads(), watch.lap(), 0, 0};

  std::vector<PlaneRestoration> planes;
  const std::size_t channels = field.colour.empty() ? 1 : field.colour.size();
  for (std::size_t c = 0; c < channels; ++c) {
    const Volume<float>& plane = field.colour.empty() ? field.pixels : field.colour[c];
    planes.push_back(restore_plane(plane, usable, settings, seed + c, mixture, pool, observer));
    planes.back().facts.channel = field.colour.empty() ? "grey" : kColours[c];
  }
  describe_planes(planes, record);
  record.run.sample_seconds = watch.lap();

  const fs::path record_file = with_suffix(task.stem, kRecordSuffix);
  const UnfinishedResult unfinished(task.stem, record);
  write_maps(task, planes, field.format, settings, map_options(field), record);
  record.run.write_seconds = watch.lap();
  write_record(record_file, record);
  return record;
}

}  // namespace

ImageRecord denoise_field(const FieldTask& task, const DenoiseSettings& settings,
                          const RunSettings& run, const Pool& pool, JobObserver& observer,
                          const PatchMixture* mixture) {
  return with_file_named(task,
                         [&] { return denoise(task, settings, run, pool, observer, mixture); });
}

}  // namespace stillfield
