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

// Couplings tried, as multiples of the lattice's transition; walked from the strongest down.
constexpr std::array<double, 8> kLadder{0.85, 1.0, 1.2, 1.4, 1.65, 1.95, 2.3, 2.7};
constexpr int kSettlingBlocks = 12;
constexpr int kCountingBlocks = 20;
constexpr int kSweepsABlock = 2;
constexpr std::uint32_t kFolds = 8;
constexpr int kSampledPixels = 8192;  // for alpha, a chain and block
// Classes never seen at a pixel in the counted sweeps keep this much of one sweep.
constexpr double kUnseen = 0.5;

struct HeldOut {
  Site site;
  double value;
  std::vector<int> visits;
};

// One chain's part of the search: a field with some pixels held out, and a chain of its own.
struct SearchField {
  GreyLevels grey;
  std::unique_ptr<Colouring> colouring;
  ObservedField observed;
  LabelChain chain;
  WeightPlanes weights;
  std::vector<HeldOut> held_out;
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
        f.held_out.push_back({f.colouring->site(x, y, z), f.grey.value(level),
                              std::vector<int>(f.chain.model.classes.mean.size())});
        level = f.grey.missing();
      }
    }
  }
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

void count_held_out(SearchField& f) {
  for (HeldOut& h : f.held_out) {
    const std::uint8_t k =
        f.chain.labels[f.colouring->label_row(h.site.colour, h.site.slice, h.site.row) +
                       f.colouring->byte_of(h.site.column)];
    ++h.visits[k];
  }
}

// Sum of the log predictive densities, and the visits emptied for the next coupling.
double score_held_out(SearchField& f, const GaussianClasses& classes) {
  const std::size_t count = classes.mean.size();
  const double total = kCountingBlocks + kUnseen;
  double sum = 0.0;
  for (HeldOut& h : f.held_out) {
    double density = 0.0;
    for (std::size_t k = 0; k < count; ++k) {
      const double p = (h.visits[k] + kUnseen / static_cast<double>(count)) / total;
      const double d = (h.value - classes.mean[k]) / classes.sd[k];
      density += p * exact_exp(-0.5 * d * d) / classes.sd[k];
      h.visits[k] = 0;
    }
    sum += exact_log(std::max(density, 1e-300));
  }
  return sum;
}

// Vertex of the least-squares parabola in ln beta through the best rung and two on either side.
double best_coupling(const std::vector<CouplingScore>& ladder) {
  std::size_t best = 0;
  for (std::size_t i = 1; i < ladder.size(); ++i) {
    if (ladder[i].score > ladder[best].score) best = i;
  }
  const std::size_t first = best >= 2 ? best - 2 : 0;
  const std::size_t last = std::min(best + 2, ladder.size() - 1);
  double s[5] = {0, 0, 0, 0, 0}, t[3] = {0, 0, 0};
  const double centre = exact_log(ladder[best].beta);
  for (std::size_t i = first; i <= last; ++i) {
    const double x = exact_log(ladder[i].beta) - centre;
    const double y = ladder[i].score - ladder[best].score;
    const double power[5] = {1.0, x, x * x, x * x * x, x * x * x * x};
    for (int p = 0; p < 5; ++p) s[p] += power[p];
    for (int p = 0; p < 3; ++p) t[p] += power[p] * y;
  }
  // Normal equations of y = a + b x + c x^2 by Cramer's rule.
  const double det = s[0] * (s[2] * s[4] - s[3] * s[3]) - s[1] * (s[1] * s[4] - s[2] * s[3]) +
                     s[2] * (s[1] * s[3] - s[2] * s[2]);
  const double b = (s[0] * (t[1] * s[4] - t[2] * s[3]) - t[0] * (s[1] * s[4] - s[2] * s[3]) +
                    s[2] * (s[1] * t[2] - s[2] * t[1])) /
                   det;
  const double c = (s[0] * (s[2] * t[2] - s[3] * t[1]) - s[1] * (s[1] * t[2] - s[2] * t[1]) +
                    t[0] * (s[1] * s[3] - s[2] * s[2])) /
                   det;
  if (!(c < 0.0)) return ladder[best].beta;
  const double low = exact_log(ladder[first].beta), high = exact_log(ladder[last].beta);
  return exact_exp(std::clamp(centre - 0.5 * b / c, low, high));
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
  for (std::size_t rung = kLadder.size(); rung-- > 0;) {
    current.beta = kLadder[rung] * transition;
    std::vector<GaussianClasses> mean_classes(chains.size());
    for (int block = 0; block < kSettlingBlocks; ++block) {
      std::vector<NeighbourCounts> samples(chains.size());
      pool.for_each(count, [&](int c) {
        SearchField& f = fields[static_cast<std::size_t>(c)];
        f.chain.model.prior = current;
        advance(f, prior, serial);
        sample_neighbours(*f.colouring, f.chain, kSampledPixels, 0.5, samples[static_cast<std::size_t>(c)]);
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
        count_held_out(f);
        for (std::size_t k = 0; k < mean.mean.size(); ++k) {
          mean.mean[k] += (f.chain.model.classes.mean[k] - mean.mean[k]) / (block + 1);
          mean.sd[k] += (f.chain.model.classes.sd[k] - mean.sd[k]) / (block + 1);
        }
      }
      score[i] = score_held_out(f, mean);
    });
    double sum = 0.0;
    for (const double s : score) sum += s;
    choice.ladder.insert(choice.ladder.begin(), {current.beta, sum, current.alpha});
  }
  choice.beta = best_coupling(choice.ladder);
  const auto nearest = std::min_element(
      choice.ladder.begin(), choice.ladder.end(), [&](const CouplingScore& a, const CouplingScore& b) {
        return std::fabs(a.beta - choice.beta) < std::fabs(b.beta - choice.beta);
      });
  choice.alpha = nearest->alpha;
  return choice;
}

}  // namespace stillfield
