#include "job/field_record.h"

#include <algorithm>
#include <cstdio>

#include "measure/from_trace.h"

namespace stillfield {
namespace {

static_assert(kPixelRhat == 1.05, "share_rhat_above_1_05 is named after it");

// A quantity that is measured on the image, with its unit; empty for the others.
std::string unit_of(const std::string& trace) {
  if (trace == "area_fraction") return "1";
  if (trace == "class_mean" || trace == "class_sd") return "grey value";
  return {};
}

ModelFacts describe_model(const LabelSampling& sampling, bool coupling_sampled) {
  ModelFacts model;
  model.beta = sampling.prior.beta;
  for (std::size_t k = 0; k < sampling.prior.alpha.size(); ++k) {
    model.classes.push_back({static_cast<int>(k) + 1, sampling.prior.alpha[k], {}, {}});
  }
  const std::vector<Trace>& traces = sampling.traces->all();
  for (std::size_t i = 0; i < traces.size(); ++i) {
    const TraceSummary& summary = sampling.scalars[i].summary;
    if (traces[i].name == "coupling") {
      model.beta = summary.mean;
      model.beta_lower95 = summary.lower95;
      model.beta_upper95 = summary.upper95;
    } else if (traces[i].name == "class_mean") {
      model.classes[static_cast<std::size_t>(traces[i].label - 1)].mean = summary;
    } else if (traces[i].name == "class_sd") {
      model.classes[static_cast<std::size_t>(traces[i].label - 1)].sd = summary;
    }
  }
  if (coupling_sampled) model.log_partition_hysteresis = sampling.log_partition_hysteresis;
  return model;
}

std::string blur_note(const BlurFacts& blur) {
  char text[160];
  std::snprintf(text, sizeof text,
                "blurred by about %.2f pixels (standard deviation); the labels account for it",
                blur.value);
  return text;
}

VerdictFacts describe_verdict(const LabelSampling& sampling, int max_sweeps) {
  VerdictFacts verdict;
  verdict.converged = sampling.verdict.converged;
  for (const MissedTarget& miss : sampling.verdict.misses) {
    verdict.sentences.push_back(miss.sentence);
  }
  if (sampling.stopped_by_limit) {
    verdict.sentences.push_back("Sampling ended at the limit of " + std::to_string(max_sweeps) +
                                " sweeps a chain; a larger --max-sweeps lets it go on.");
  }
  if (sampling.warm_up_forced) {
    verdict.sentences.push_back(
        "Warm-up ended at its limit: the chains still disagreed when sampling began.");
  }
  return verdict;
}

}  // namespace

void describe_grey(const GreyLevels& grey, ImageRecord& record) {
  record.grey = {grey.levels, grey.distinct(), grey.origin,
                 grey.step,   grey.observed,   grey.level.extent().sites() - grey.observed};
  std::vector<std::string>& notes = record.input.notes;
  notes.insert(notes.end(), grey.notes.begin(), grey.notes.end());
}

void describe_sampling(const LabelSampling& sampling, const SegmentSettings& settings,
                       ImageRecord& record) {
  record.model = describe_model(sampling, settings.coupling.mode == CouplingMode::kSampled);
  record.blur = sampling.blur;
  if (sampling.blur.estimated && sampling.blur.modelled) {
    record.input.notes.push_back(blur_note(sampling.blur));
  }
  for (const CouplingScore& tried : sampling.coupling_ladder) {
    record.coupling_tried.push_back({tried.beta, tried.score});
  }
  record.schedule = {sampling.adapting_sweeps, sampling.warming_sweeps, sampling.sampling_sweeps,
                     sampling.warm_up_forced, sampling.stopped_by_limit};
  record.scalars = sampling.scalars;
  record.probability.mcse = sampling.probability.mcse;
  record.probability.share_rhat_above_1_05 = sampling.probability.worst_share;
  record.verdict = describe_verdict(sampling, settings.schedule.max_sweeps);
  const std::vector<Trace>& traces = sampling.traces->all();
  for (std::size_t i = 0; i < traces.size(); ++i) {
    const std::string unit = unit_of(traces[i].name);
    if (unit.empty()) continue;
    record.measurements.push_back(measurement_from_summary(traces[i].name, traces[i].label, unit,
                                                           sampling.scalars[i].summary));
  }
}

void describe_light(const ShadingFacts& light, ImageRecord& record) {
  record.shading = light;
  if (!light.modelled) return;
  char text[160];
  std::snprintf(
      text, sizeof text,
      "uneven light, from %.2f to %.2f of its mean; labels and grey values account for it",
      light.lowest, light.highest);
  record.input.notes.push_back(text);
}

void describe_measured(const std::vector<Measurement>& measured, bool complete,
                       ImageRecord& record) {
  for (const Measurement& m : measured) {
    if (m.name != "area_fraction") {
      record.measurements.push_back(m);
    } else if (!complete) {
      const auto of_traces = std::find_if(record.measurements.begin(), record.measurements.end(),
                                          [&m](const Measurement& other) {
                                            return other.name == m.name && other.label == m.label;
                                          });
      *of_traces = m;
    }
  }
}

}  // namespace stillfield
