#include "job/short_run.h"

#include "posterior/label_counts.h"
#include "sampler/neighbour_sample.h"
#include "sampler/starts.h"

namespace stillfield {
namespace {

constexpr int kSampledPixels = 8192;

// The chains count classes from 0.
Volume<std::uint8_t> from_zero(View<const std::uint8_t> labels) {
  Volume<std::uint8_t> out(labels.extent());
  for (int y = 0; y < labels.height(); ++y) {
    for (int x = 0; x < labels.width(); ++x) {
      out.at(x, y) = static_cast<std::uint8_t>(labels.at(x, y) - 1);
    }
  }
  return out;
}

void fit_class_field(const Colouring& colouring, int block, LabelChain& chain) {
  NeighbourCounts sample;
  sample_neighbours(colouring, chain, kSampledPixels, 0.5, sample);
  climb_class_field(sample, 2.0 / (2.0 + block), chain.model.prior);
}

double mean_over(const Volume<float>& probability, View<const std::uint8_t> usable) {
  const bool all = usable.extent().sites() == 0;
  double sum = 0;
  std::int64_t pixels = 0;
  for (int y = 0; y < probability.height(); ++y) {
    double row = 0;
    for (int x = 0; x < probability.width(); ++x) {
      if (!all && usable.at(x, y) == 0) continue;
      row += double{probability.at(x, y)};
      ++pixels;
    }
    sum += row;
  }
  return sum / static_cast<double>(pixels);
}

}  // namespace

ShortRun run_shortly(const GreyLevels& grey, View<const std::uint8_t> usable,
                     View<const std::uint8_t> start, const LabelModel& model,
                     const ShortRunSettings& settings, PhiloxKey key, const Pool& pool,
                     WeightPlanes& weights) {
  const Colouring colouring(grey.level.extent(), make_neighbourhood(settings.connectivity));
  LabelPosterior problem;
  problem.field = observe(colouring, grey);
  problem.prior = default_prior(grey, model.classes);
  LabelChain chain;
  chain.key = key;
  chain.model = model;
  chain.labels = guarded_labels(colouring);
  scatter_labels(colouring, from_zero(start).view(), chain.labels);

  const int blocks = settings.settling / settings.sweeps_a_block;
  for (int block = 0; block < blocks; ++block) {
    advance_chain(problem, settings.sweeps_a_block, pool, weights, chain);
    if (settings.fit_class_field) fit_class_field(colouring, block, chain);
  }
  chain.visits = AlignedBuffer<std::uint8_t>(colouring.plane_elements() *
                                             static_cast<std::size_t>(model.size() - 1));
  for (int sweep = 0; sweep < settings.counted; sweep += settings.sweeps_a_block) {
    advance_chain(problem, settings.sweeps_a_block, pool, weights, chain);
  }
  LabelCounts counts(colouring, model.size(), 1, settings.counted);
  counts.take(0, chain);

  ShortRun run;
  run.labels = counts.most_probable();
  for (int k = 0; k < model.size(); ++k) {
    run.share.push_back(mean_over(counts.probability(k), usable));
  }
  return run;
}

}  // namespace stillfield
