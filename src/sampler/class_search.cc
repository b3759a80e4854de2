#include "sampler/class_search.h"

#include <algorithm>
#include <array>
#include <cmath>
#include <functional>
#include <limits>

#include "core/elementary.h"
#include "sampler/class_trial.h"

namespace stillfield {
namespace {

// Predicts held-out pixels best, or nearly so, on disks, cells and blobs of 2 to 5 classes
// (docs/trust.md); the same for every K, so that scores differ by the classes alone.
constexpr double kCoupling = 1.5;
constexpr std::array<int, 2> kRadii{1, 2};  // of the squares that starts are averaged over
constexpr std::uint32_t kParts = 8;         // the first judges the starts, the others K
constexpr int kPatience = 2;                // numbers of classes without a better score
// Below this size one image cannot keep two threads busy: trials run side by side instead.
constexpr std::int64_t kRowParallelPixels = 320 * 320;
// Chain numbers of the trials, far above those of the sampler's chains.
constexpr std::uint32_t kPartsKey = 64;
constexpr std::uint32_t kStartKeys = 1 << 10;
constexpr std::uint32_t kJudgeKeys = 2 << 10;
constexpr std::uint32_t kKeysEach = 32;

double sum_of(const std::vector<double>& values) {
  double sum = 0.0;
  for (const double v : values) sum += v;
  return sum;
}

LabelStart one_class(const GreyLevels& grey, bool shared_variance) {
  double sum = 0.0, square = 0.0;
  const auto n = static_cast<double>(grey.observed);
  for (int l = 0; l < grey.levels; ++l) {
    sum += static_cast<double>(grey.histogram[static_cast<std::size_t>(l)]) * grey.value(l);
  }
  for (int l = 0; l < grey.levels; ++l) {
    const double d = grey.value(l) - sum / n;
    square += static_cast<double>(grey.histogram[static_cast<std::size_t>(l)]) * d * d;
  }
  return {Volume<std::uint8_t>(grey.level.extent()),
          {{sum / n}, {std::sqrt(square / n)}, shared_variance}};
}

// Class `split` becomes two, told apart by the pixel's own grey value.
LabelStart split_class(const GreyLevels& grey, const LabelStart& whole, std::size_t split) {
  LabelStart out{Volume<std::uint8_t>(whole.labels.extent()), whole.classes};
  std::vector<double>& means = out.classes.mean;
  std::vector<double>& sds = out.classes.sd;
  const double mean = means[split], sd = sds[split];
  // The means of the halves of a normal class lie sqrt(2 / pi) sd beside its mean; less far, so
  // that they stay between those of the classes beside it.
  double apart = 0.8 * sd;
  if (split > 0) apart = std::min(apart, 0.5 * (mean - means[split - 1]));
  if (split + 1 < means.size()) apart = std::min(apart, 0.5 * (means[split + 1] - mean));
  const auto at = static_cast<std::ptrdiff_t>(split);
  means[split] = mean + apart;
  means.insert(means.begin() + at, mean - apart);
  sds[split] = 0.6 * sd;  // sqrt(1 - 2 / pi)
  sds.insert(sds.begin() + at, 0.6 * sd);
  const Extent e = whole.labels.extent();
  for (int z = 0; z < e.depth; ++z) {
    for (int y = 0; y < e.height; ++y) {
      for (int x = 0; x < e.width; ++x) {
        const std::size_t k = whole.labels.at(x, y, z);
        const std::uint16_t level = grey.level.at(x, y, z);
        const bool above = level != grey.missing() && grey.value(level) > mean;
        out.labels.at(x, y, z) =
            static_cast<std::uint8_t>(k + (k > split || (k == split && above) ? 1 : 0));
      }
    }
  }
  return out;
}

std::vector<LabelStart> starts_for(const GreyLevels& grey, int classes, bool shared_variance,
                                   const LabelStart& one_fewer) {
  std::vector<LabelStart> starts;
  if (classes == 1) {
    starts.push_back(one_class(grey, shared_variance));
    return starts;
  }
  for (const int radius : kRadii) {
    starts.push_back(smoothed_start(grey, classes, radius, shared_variance));
  }
  for (std::size_t k = 0; k < one_fewer.classes.mean.size(); ++k) {
    starts.push_back(split_class(grey, one_fewer, k));
  }
  return starts;
}

// Parameters: means, standard deviations and class fields, less the field that is fixed.
double penalty(int classes, bool shared_variance, std::size_t pixels) {
  const int parameters = shared_variance ? 2 * classes : 3 * classes - 1;
  const auto n = static_cast<double>(std::max<std::size_t>(pixels, 1));
  return std::max(0.5 * parameters * exact_log(n), kLeastGain * n * classes);
}

double score_of(const std::vector<double>& log_density, int classes, bool shared_variance) {
  return sum_of(log_density) - penalty(classes, shared_variance, log_density.size());
}

}  // namespace

ClassSearch choose_by_scores(const std::vector<std::vector<double>>& log_density,
                             bool shared_variance) {
  ClassSearch search;
  std::size_t best = 0;
  for (std::size_t i = 0; i < log_density.size(); ++i) {
    const int classes = static_cast<int>(i) + 1;
    const double score = score_of(log_density[i], classes, shared_variance);
    search.tried.push_back({classes, score, 0.0, 0.0});
    if (score > search.tried[best].score) best = i;
  }
  for (std::size_t i = 0; i < log_density.size(); ++i) {
    const auto n = static_cast<double>(log_density[i].size());
    double sum = 0.0, square = 0.0;
    for (std::size_t s = 0; s < log_density[i].size(); ++s) {
      const double d = log_density[best][s] - log_density[i][s];
      sum += d;
      square += d * d;
    }
    TriedClasses& tried = search.tried[i];
    tried.below_best = search.tried[best].score - tried.score;
    tried.error = std::sqrt(std::max(0.0, square - sum * sum / n));
  }
  const auto good = [](const TriedClasses& t) { return t.below_best <= kSearchErrors * t.error; };
  search.choice = std::find_if(search.tried.begin(), search.tried.end(), good)->classes;
  return search;
}

ClassSearch search_classes(const GreyLevels& grey, const Neighbourhood& neighbourhood,
                           bool shared_variance, int most, std::uint64_t seed, const Pool& pool) {
  const Pool serial(1);
  const bool side_by_side = grey.level.extent().sites() < kRowParallelPixels && pool.threads() > 1;
  const auto try_all = [&](std::vector<ClassTrial>& trials,
                           const std::function<ClassTrial(int, const Pool&)>& attempt) {
    const int n = static_cast<int>(trials.size());
    const auto one = [&](int i, const Pool& inner) {
      trials[static_cast<std::size_t>(i)] = attempt(i, inner);
    };
    if (side_by_side) {
      pool.for_each(n, [&](int i) { one(i, serial); });
    } else {
      for (int i = 0; i < n; ++i) one(i, pool);
    }
  };
  TrialSettings settings;
  settings.beta = kCoupling;
  settings.parts = kParts;
  settings.parts_key = chain_key(seed, kPartsKey);

  std::vector<std::vector<double>> log_density;
  LabelStart best;
  double best_score = -std::numeric_limits<double>::infinity();
  int best_classes = 1;
  for (int classes = 1; classes <= std::min(most, grey.distinct()); ++classes) {
    const std::vector<LabelStart> starts = starts_for(grey, classes, shared_variance, best);
    const auto key = [&](std::uint32_t first, int i) {
      return chain_key(seed, first + kKeysEach * static_cast<std::uint32_t>(classes) +
                                 static_cast<std::uint32_t>(i));
    };
    std::vector<ClassTrial> trials(starts.size());
    try_all(trials, [&](int i, const Pool& inner) {
      TrialSettings own = settings;
      own.settling_blocks = 15;
      own.counting_blocks = 8;
      own.chain_key = key(kStartKeys, i);
      return try_classes(grey, neighbourhood, starts[static_cast<std::size_t>(i)], own, inner);
    });
    const auto worse = [](const ClassTrial& a, const ClassTrial& b) {
      return sum_of(a.log_density) < sum_of(b.log_density);
    };
    best = std::move(std::max_element(trials.begin(), trials.end(), worse)->end);

    std::vector<ClassTrial> judged(kParts - 1);
    try_all(judged, [&](int i, const Pool& inner) {
      TrialSettings own = settings;
      own.settling_blocks = 12;
      own.counting_blocks = 12;
      own.part = static_cast<std::uint32_t>(1 + i);
      own.chain_key = key(kJudgeKeys, i);
      return try_classes(grey, neighbourhood, best, own, inner);
    });
    std::vector<double> all;
    for (const ClassTrial& trial : judged) {
      all.insert(all.end(), trial.log_density.begin(), trial.log_density.end());
    }
    const double score = score_of(all, classes, shared_variance);
    log_density.push_back(std::move(all));
    if (score > best_score) {
      best_score = score;
      best_classes = classes;
    }
    if (classes - best_classes >= kPatience) break;
  }
  return choose_by_scores(log_density, shared_variance);
}

}  // namespace stillfield
