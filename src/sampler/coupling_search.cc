#include "sampler/coupling_search.h"

#include <algorithm>
#include <array>
#include <cmath>
#include <memory>

#include "core/elementary.h"
#include "sampler/held_out.h"
#include "sampler/neighbour_sample.h"
#include "sampler/path_sampling.h"
#include "sampler/sweep.h"

namespace stillfield {
namespace {

// Couplings tried, as multiples of the lattice's transition; walked upwards, because a field
// that was frozen by a strong coupling takes long to thaw.
constexpr std::array<double, 10> kLadder{0.85, 1.0, 1.2, 1.4, 1.65, 1.95, 2.3, 2.7, 3.2, 3.8};
constexpr int kSettlingBlocks = 12;
constexpr int kCountingBlocks = 20;
constexpr int kSweepsABlock = 2;
constexpr std::uint32_t kFolds = 8;
constexpr int kSampledPixels = 8192;  // for alpha, a chain and block
// Differences of scores below this many nats say little: the weights of rungs are softened by it.
// Common practice, no source; of the order of the standard error of a difference on 128^2 fields.
constexpr double kScoreNoise = 12.0;

// One chain's part of the search: a field with some pixels held out, and a chain of its own.
struct SearchField {
  GreyLevels grey;
  std::unique_ptr<Colouring> colouring;
  ObservedField observed;
  LabelChain chain;
  WeightPlanes weights;
  HeldOut held_out;
};

// Top-left corner of chain c's window: the centres of the quarters of the image, on multiples of 4.
Offset window_corner(const Extent& e, int c, int width, int height) {
  const auto place = [](int size, int window, int side) {
    const int centre = side == 0 ? size / 4 : 3 * size / 4;
    return std::clamp(centre - window / 2, 0, size - window) / 4 * 4;
  };
  return {place(e.width, width, c & 1), place(e.height, height, c >> 1 & 1), 0};
}

// Fills `f` in place: its observed field refers to its grey levels and colouring.
void open_search_field(const ObservedField& field, const LabelChain& chain, int c, SearchField& f) {
  const Extent whole = field.colouring->extent();
  Extent part = whole;
  Offset corner;
  if (whole.sites() > kWholeField) {
    part.width = std::min(whole.width, kSearchWindow);
    part.height = std::min(whole.height, kSearchWindow);
    corner = window_corner(whole, c, part.width, part.height);
  }
  f.grey.origin = field.grey->origin;
  f.grey.step = field.grey->step;
  f.grey.levels = field.grey->levels;
  f.grey.histogram = field.grey->histogram;  // says which levels occur
  f.grey.level = Volume<std::uint16_t>(part);
  f.colouring = std::make_unique<Colouring>(part, field.colouring->neighbourhood(), corner);
  Volume<std::uint8_t> labels(part);
  for (int z = 0; z < part.depth; ++z) {
    for (int y = 0; y < part.height; ++y) {
      for (int x = 0; x < part.width; ++x) {
        const int gx = x + static_cast<int>(corner.x), gy = y + static_cast<int>(corner.y);
        f.grey.level.at(x, y, z) = field.grey->level.at(gx, gy, z);
        const Site s = field.colouring->site(gx, gy, z);
        labels.at(x, y, z) = chain.labels[field.colouring->label_row(s.colour, s.slice, s.row) +
                                          field.colouring->byte_of(s.column)];
      }
    }
  }
  f.chain.key = chain.key;
  f.chain.model = chain.model;
  f.chain.labels = guarded_labels(*f.colouring);
  scatter_labels(*f.colouring, labels.view(), f.chain.labels);
  f.held_out = hold_out(*f.colouring, f.chain.key, static_cast<std::uint32_t>(c) % kFolds, kFolds,
                        f.chain.model.size(), f.grey);
  f.observed = observe(*f.colouring, f.grey);
}

void advance(SearchField& f, const GaussianPrior& prior, const Pool& pool) {
  prepare_weights(f.observed, f.chain.model, pool, f.weights);
  sweep_labels(*f.colouring, f.weights, kSweepsABlock, Purpose::kHeldOut, pool, f.chain);
  total_labels(f.observed, pool, f.chain);
  RandomStream random(f.chain.key, Purpose::kHeldOut, f.chain.sweeps_done);
  draw_gaussian_classes(f.grey, f.chain.totals.classes, prior, random, f.chain.model.classes);
}

// Mean of beta and alpha over the ladder, each rung weighted by exp((score - best) / kScoreNoise).
void average_ladder(CouplingChoice& choice) {
  double best = choice.ladder.front().score;
  for (const CouplingScore& rung : choice.ladder) best = std::max(best, rung.score);
  choice.alpha.assign(choice.ladder.front().alpha.size(), 0.0);
  double total = 0.0;
  choice.beta = 0.0;
  for (const CouplingScore& rung : choice.ladder) {
    const double w = exact_exp((rung.score - best) / kScoreNoise);
    total += w;
    choice.beta += w * rung.beta;
    for (std::size_t k = 0; k < choice.alpha.size(); ++k) choice.alpha[k] += w * rung.alpha[k];
  }
  choice.beta /= total;
  for (double& a : choice.alpha) a /= total;
}

}  // namespace

CouplingChoice search_coupling(const ObservedField& field, const GaussianPrior& prior,
                               const std::vector<LabelChain>& chains, const Pool& pool) {
  const Pool serial(1);
  const int count = static_cast<int>(chains.size());
  std::vector<SearchField> fields(chains.size());
  pool.for_each(count, [&](int c) {
    const auto i = static_cast<std::size_t>(c);
    open_search_field(field, chains[i], c, fields[i]);
  });
  const double transition =
      transition_coupling(field.colouring->neighbourhood(), chains.front().model.size());
  LabelPrior current = chains.front().model.prior;
  CouplingChoice choice;
  for (const double multiple : kLadder) {
    current.beta = multiple * transition;
    std::vector<GaussianClasses> mean_classes(chains.size());
    for (int block = 0; block < kSettlingBlocks; ++block) {
      std::vector<NeighbourCounts> samples(chains.size());
      pool.for_each(count, [&](int c) {
        SearchField& f = fields[static_cast<std::size_t>(c)];
        f.chain.model.prior = current;
        advance(f, prior, serial);
        sample_neighbours(*f.colouring, f.chain, kSampledPixels, 0.5,
                          samples[static_cast<std::size_t>(c)]);
      });
      NeighbourCounts all = std::move(samples.front());
      for (std::size_t c = 1; c < samples.size(); ++c) {
        all.label.insert(all.label.end(), samples[c].label.begin(), samples[c].label.end());
        all.count.insert(all.count.end(), samples[c].count.begin(), samples[c].count.end());
      }
      climb_class_field(all, 2.0 / (2.0 + block), current);
    }
    std::vector<double> score(chains.size());
    pool.for_each(count, [&](int c) {
      const auto i = static_cast<std::size_t>(c);
      SearchField& f = fields[i];
      f.chain.model.prior = current;
      GaussianClasses mean = f.chain.model.classes;
      for (int block = 0; block < kCountingBlocks; ++block) {
        advance(f, prior, serial);
        predict_held_out(f.chain, f.held_out);
        for (std::size_t k = 0; k < mean.mean.size(); ++k) {
          mean.mean[k] += (f.chain.model.classes.mean[k] - mean.mean[k]) / (block + 1);
          mean.sd[k] += (f.chain.model.classes.sd[k] - mean.sd[k]) / (block + 1);
        }
      }
      for (const double l : take_log_densities(mean, f.held_out)) score[i] += l;
    });
    double sum = 0.0;
    for (const double s : score) sum += s;
    choice.ladder.push_back({current.beta, sum, current.alpha});
  }
  average_ladder(choice);
  return choice;
}

}  // namespace stillfield
