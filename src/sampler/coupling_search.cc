#include "sampler/coupling_search.h"

#include <algorithm>
#include <array>
#include <cmath>
#include <memory>

#include "core/elementary.h"
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

// The held-out pixels of one field. P(z_s = k | neighbours) is averaged over the counted sweeps:
// far less noisy than the share of sweeps with label k (Rao-Blackwell).
struct HeldOut {
  std::vector<double> value;
  std::vector<std::size_t> neighbour;  // [pixel * neighbours + i]: label bytes
  std::vector<double> weight;          // [i], the same for all pixels
  std::vector<double> probability;     // [pixel * classes + k]: sums over the counted sweeps
};

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

void hold_out(SearchField& f, int fold) {
  const Colouring& c = *f.colouring;
  HeldOut& held = f.held_out;
  for (const NeighbourRing& ring : c.neighbourhood().rings) {
    held.weight.insert(held.weight.end(), ring.neighbours.size(), ring.weight);
  }
  const auto hold = [&](int x, int y, int z) {
    const Site s = c.site(x, y, z);
    const LabelBand band = c.band(s.colour, s.slice);
    const std::size_t at = c.label_row(s.colour, s.slice, s.row) + c.byte_of(s.column);
    for (int r = 0; r < band.ring_count; ++r) {
      const Ring& ring = band.rings[static_cast<std::size_t>(r)];
      for (int i = 0; i < ring.neighbours; ++i) {
        held.neighbour.push_back(at + ring.offset[s.row & 1][i]);
      }
    }
  };
  const Extent e = f.grey.level.extent();
  for (int z = 0; z < e.depth; ++z) {
    for (int y = 0; y < e.height; ++y) {
      for (int x = 0; x < e.width; ++x) {
        std::uint16_t& level = f.grey.level.at(x, y, z);
        if (level == f.grey.missing()) continue;
        const std::uint32_t w =
            philox4x32({static_cast<std::uint32_t>(x), static_cast<std::uint32_t>(y),
                        static_cast<std::uint32_t>(z), counter_word3(Purpose::kHeldOut, 0, 0)},
                       f.chain.key)[0];
        if (w % kFolds != static_cast<std::uint32_t>(fold) % kFolds) continue;
        hold(x, y, z);
        held.value.push_back(f.grey.value(level));
        level = f.grey.missing();
      }
    }
  }
  held.probability.resize(held.value.size() * f.chain.model.classes.mean.size());
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
  hold_out(f, c);
  f.observed = observe(*f.colouring, f.grey);
}

void advance(SearchField& f, const GaussianPrior& prior, const Pool& pool) {
  prepare_weights(f.observed, f.chain.model, pool, f.weights);
  sweep_labels(*f.colouring, f.weights, kSweepsABlock, Purpose::kHeldOut, pool, f.chain);
  total_labels(f.observed, pool, f.chain);
  RandomStream random(f.chain.key, Purpose::kHeldOut, f.chain.sweeps_done);
  draw_gaussian_classes(f.grey, f.chain.totals.classes, prior, random, f.chain.model.classes);
}

// Adds P(z_s = k | neighbours) of the current labels.
void predict_held_out(SearchField& f) {
  HeldOut& held = f.held_out;
  const LabelPrior& prior = f.chain.model.prior;
  const std::size_t classes = prior.alpha.size();
  const std::size_t neighbours = held.weight.size();
  std::vector<double> p(classes);
  for (std::size_t s = 0; s < held.value.size(); ++s) {
    p = prior.alpha;
    for (std::size_t i = 0; i < neighbours; ++i) {
      const std::uint8_t k = f.chain.labels[held.neighbour[s * neighbours + i]];
      if (k < classes) p[k] += prior.beta * held.weight[i];
    }
    const double top = *std::max_element(p.begin(), p.end());
    double sum = 0.0;
    for (double& v : p) sum += v = exact_exp(v - top);
    for (std::size_t k = 0; k < classes; ++k) held.probability[s * classes + k] += p[k] / sum;
  }
}

// Sum of the log predictive densities; the probabilities are emptied for the next coupling.
double score_held_out(SearchField& f, const GaussianClasses& model) {
  HeldOut& held = f.held_out;
  const std::size_t classes = model.mean.size();
  double sum = 0.0;
  for (std::size_t s = 0; s < held.value.size(); ++s) {
    double density = 0.0;
    for (std::size_t k = 0; k < classes; ++k) {
      const double d = (held.value[s] - model.mean[k]) / model.sd[k];
      const double p = held.probability[s * classes + k] / kCountingBlocks;
      density += p * exact_exp(-0.5 * d * d) / model.sd[k];
    }
    sum += exact_log(std::max(density, 1e-300));
  }
  std::fill(held.probability.begin(), held.probability.end(), 0.0);
  return sum;
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
        predict_held_out(f);
        for (std::size_t k = 0; k < mean.mean.size(); ++k) {
          mean.mean[k] += (f.chain.model.classes.mean[k] - mean.mean[k]) / (block + 1);
          mean.sd[k] += (f.chain.model.classes.sd[k] - mean.sd[k]) / (block + 1);
        }
      }
      score[i] = score_held_out(f, mean);
    });
    double sum = 0.0;
    for (const double s : score) sum += s;
    choice.ladder.push_back({current.beta, sum, current.alpha});
  }
  average_ladder(choice);
  return choice;
}

}  // namespace stillfield
