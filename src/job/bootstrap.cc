#include "job/bootstrap.h"

#include <algorithm>
#include <cmath>
#include <utility>

#include "core/error.h"
#include "diagnose/moments.h"
#include "job/edge_blur.h"
#include "job/every_chain.h"
#include "job/label_draws.h"
#include "job/short_run.h"
#include "measure/bootstrap_shares.h"
#include "measure/label_cleaning.h"
#include "measure/one_particle.h"
#include "model/label_scene.h"

namespace stillfield {
namespace {

constexpr std::uint32_t kFirstKey = 0x1000;  // chain numbers of the short runs
constexpr int kDrawsAChain = 8;              // for the posterior scatter of cleaned draws
constexpr int kLargeReplicates = 8;

using Labels = Volume<std::uint8_t>;
using Values = std::vector<double>;

// Posterior means of the classes; the coupling and class field as frozen.
LabelModel mean_model(const LabelSampling& sampling) {
  LabelModel model = sampling.chains.front().model;
  model.prior = sampling.prior;
  const std::vector<Trace>& traces = sampling.traces->all();
  for (std::size_t i = 0; i < traces.size(); ++i) {
    const double mean = sampling.scalars[i].summary.mean;
    const auto k = static_cast<std::size_t>(std::max(traces[i].label, 1) - 1);
    if (traces[i].name == "class_mean") model.classes.mean[k] = mean;
    if (traces[i].name == "class_sd") model.classes.sd[k] = mean;
    if (traces[i].name == "coupling") model.prior.beta = mean;
  }
  return model;
}

ShortRunSettings short_run_settings(const SegmentSettings& settings, std::int64_t pixels) {
  ShortRunSettings run;
  run.connectivity = settings.connectivity;
  run.fit_class_field = settings.coupling.mode == CouplingMode::kAuto;
  run.sweeps_a_block = settings.schedule.sweeps_a_block;
  if (pixels > kWholeRuns) {
    run.settling = 40;
    run.counted = 60;
  }
  return run;
}

// Everything the replicates share.
struct Setting {
  const BootstrapInput& input;
  std::vector<MeasureKey> keys;
  LabelModel model;
  ShortRunSettings run;
  double blur = 0;
  GaussianClasses scene;           // means and noise of the simulated images
  std::vector<double> least_area;  // of a clear component

  Values measure(View<const std::uint8_t> labels, View<const float> pixels) const {
    return measure_labels(labels, pixels, input.usable, input.measure);
  }
  Labels cleaned(View<const std::uint8_t> labels) const {
    return without_specks(labels, least_area);
  }
  Values statistic(const ShortRun& result, View<const float> pixels) const {
    Values values = measure(cleaned(result.labels.view()).view(), pixels);
    for (std::size_t i = 0; i < keys.size(); ++i) {
      if (keys[i].name == "area_fraction") {
        values[i] = result.share[static_cast<std::size_t>(keys[i].label - 1)];
      }
    }
    return values;
  }
};

// The blur that was modelled; without one, what the borders show.
double simulated_blur(const Setting& setting, const LabelSampling& sampling,
                      View<const std::uint8_t> found, const Pool& pool) {
  if (sampling.blur.modelled) return sampling.blur.value;
  return blur_from_edges(setting.input.grey, found, setting.model, setting.run,
                         setting.input.image_seed, pool);
}

// Smoothed draws: some of them truths, and what is measured on all of them once cleaned.
struct SmoothedDraws {
  std::vector<Labels> truths;
  std::vector<Values> measured;  // [draw]
};

SmoothedDraws smoothed_draws(const Setting& setting, int truths, const Pool& pool,
                             JobObserver& observer, LabelSampling& sampling) {
  const int chains = static_cast<int>(sampling.chains.size());
  SmoothedDraws all;
  all.truths.resize(static_cast<std::size_t>(truths));
  all.measured.resize(static_cast<std::size_t>(chains * kDrawsAChain));
  // Truths come from as many chains as there are, then from draws as far apart as there are.
  const int rounds = (truths + chains - 1) / chains;
  for_label_draws(
      setting.input.settings, kDrawsAChain, pool, observer, sampling, [&](const LabelDraw& draw) {
        Labels smooth = majority_labels(draw.labels, setting.model.size());
        const auto at = static_cast<std::size_t>(draw.draw * chains + draw.chain);
        all.measured[at] =
            setting.measure(setting.cleaned(smooth.view()).view(), setting.input.pixels);
        for (int round = 0; round < rounds; ++round) {
          const int truth = round * chains + draw.chain;
          if (draw.draw == kDrawsAChain - 1 - round * kDrawsAChain / rounds && truth < truths) {
            all.truths[static_cast<std::size_t>(truth)] = std::move(smooth);
          }
        }
      });
  return all;
}

// T(y*) - m(z*) of one replicate.
Values errors_of(const Setting& setting, View<const std::uint8_t> truth, int number,
                 WeightPlanes& weights, const Pool& pool) {
  const PhiloxKey key =
      chain_key(setting.input.image_seed, kFirstKey + static_cast<std::uint32_t>(number));
  const GreyLevels simulated =
      simulate_scene(setting.input.grey, truth, setting.blur, setting.scene, key);
  const ShortRun again = run_shortly(simulated, setting.input.usable, truth, setting.model,
                                     setting.run, key, pool, weights);
  const Volume<float> pixels = grey_values(simulated);
  Values errors = setting.statistic(again, pixels.view());
  const Values truths = setting.measure(truth, pixels.view());
  for (std::size_t i = 0; i < errors.size(); ++i) errors[i] -= truths[i];
  return errors;
}

double variance_over(const std::vector<Values>& draws, std::size_t key) {
  Values finite;
  for (const Values& v : draws) {
    if (std::isfinite(v[key])) finite.push_back(v[key]);
  }
  return finite.size() < 2 ? 0.0 : variance_of(finite);
}

template <class Measurements>
auto find(const MeasureKey& key, Measurements& measurements) -> decltype(measurements.data()) {
  for (auto& m : measurements) {
    if (m.name == key.name && m.label == key.label) return &m;
  }
  return nullptr;
}

}  // namespace

Bootstrap run_bootstrap(const BootstrapInput& input, const Pool& pool, JobObserver& observer,
                        const std::vector<Measurement>& plain, LabelSampling& sampling) {
  const Extent extent = input.grey.level.extent();
  Setting setting{input,
                  measure_keys(input.measure),
                  mean_model(sampling),
                  short_run_settings(input.settings, extent.sites()),
                  0.0,
                  {},
                  {}};
  const int asked = input.settings.replicates;
  const int each = (extent.sites() > kWholeRuns ? std::min(asked, kLargeReplicates) : asked) / 2;
  const auto stop = [&] {
    if (observer.stop_requested()) throw Error(ErrorKind::kInterrupt, "stopped on request");
  };

  const Labels found = sampling.counts->most_probable();
  setting.blur = simulated_blur(setting, sampling, found.view(), pool);
  stop();
  setting.scene = setting.blur > 0
                      ? fit_scene(input.grey, found.view(), setting.blur, setting.model.classes)
                      : setting.model.classes;
  setting.least_area = least_clear_areas(setting.scene.mean, setting.scene.sd);
  const Labels smooth = setting.cleaned(found.view());
  const SmoothedDraws draws = smoothed_draws(setting, each, pool, observer, sampling);

  // Run 0 is of the image itself.
  ShortRun base;
  std::vector<std::vector<Values>> errors(2, std::vector<Values>(static_cast<std::size_t>(each)));
  EveryChain every(extent, 1 + 2 * each, pool);
  every.run([&](int r, WeightPlanes& weights, const Pool& inner) {
    if (observer.stop_requested()) return;
    if (r == 0) {
      base = run_shortly(input.grey, input.usable, found.view(), setting.model, setting.run,
                         chain_key(input.image_seed, kFirstKey), inner, weights);
      return;
    }
    const auto i = static_cast<std::size_t>((r - 1) / 2);
    const bool drawn = r % 2 == 0;
    errors[drawn ? 1 : 0][i] =
        errors_of(setting, drawn ? draws.truths[i].view() : smooth.view(), r, weights, inner);
  });
  stop();

  const Values value = setting.statistic(base, input.pixels);
  const Values floor = one_particle_variances(setting.cleaned(base.labels.view()).view(),
                                              input.usable, input.measure, setting.least_area);
  Bootstrap result{{2 * each, 0, setting.blur}, setting.keys, {}};
  for (std::size_t i = 0; i < setting.keys.size(); ++i) {
    const MeasureKey& key = setting.keys[i];
    const bool fraction = key.name == "area_fraction";
    BootstrapErrors& all = result.errors.emplace_back();
    all.value = value[i];
    for (const std::vector<Values>& kind : errors) {
      Values& list = all.errors.emplace_back();
      for (const Values& e : kind) list.push_back(e[i]);
    }
    const Measurement* of_draws = find(key, plain);
    all.posterior_variance = fraction && of_draws != nullptr ? of_draws->sd * of_draws->sd
                                                             : variance_over(draws.measured, i);
    all.floor_variance = floor[i];
    if (key.name != "mean_intensity") all.lowest = 0;
    if (fraction) all.highest = 1;
  }
  return result;
}

void correct_measurements(Bootstrap& bootstrap, std::vector<Measurement>& measurements) {
  double number_variance = 0;  // of the particles of the class, whose count comes before its sizes
  for (std::size_t i = 0; i < bootstrap.keys.size(); ++i) {
    const std::string& name = bootstrap.keys[i].name;
    if (name == "particle_count") number_variance = 0;
    Measurement* m = find(bootstrap.keys[i], measurements);
    if (m == nullptr || !std::isfinite(m->estimate)) continue;
    BootstrapErrors errors = bootstrap.errors[i];
    if (name != "particle_count") errors.floor_variance *= number_variance;
    if (!correct_measurement(errors, bootstrap_shares(name), *m)) continue;
    if (name == "particle_count") number_variance = m->sd * m->sd;
    ++bootstrap.facts.corrected;
  }
}

}  // namespace stillfield
