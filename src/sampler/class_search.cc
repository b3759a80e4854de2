#include "sampler/class_search.h"

#include <algorithm>
#include <cmath>
#include <cstdio>
#include <cstdlib>
#include <functional>

#include "core/elementary.h"
#include "sampler/class_trial.h"

namespace stillfield {
namespace {

double env(const char* n, double d) { const char* v = std::getenv(n); return v ? std::atof(v) : d; }
double kErrors = env("ERRORS", 2);
double kCoupling = env("BETA", 1.5);
constexpr std::uint32_t kParts = 8;
const int kJudgedParts = (int)env("PARTS", 4);
constexpr std::int64_t kRowParallelPixels = 320 * 320;

double sum_of(const std::vector<double>& values) {
  double sum = 0.0;
  for (const double v : values) sum += v;
  return sum;
}

// Class `split` becomes two, told apart by the pixel's own grey value.
LabelStart split_class(const GreyLevels& grey, const LabelStart& whole, std::size_t split) {
  LabelStart out{Volume<std::uint8_t>(whole.labels.extent()), whole.classes};
  const double mean = whole.classes.mean[split], sd = whole.classes.sd[split];
  const auto at = [split](std::vector<double>& list) {
    return list.begin() + static_cast<std::ptrdiff_t>(split);
  };
  out.classes.mean[split] = mean + 0.7 * sd;
  out.classes.sd[split] = 0.7 * sd;
  out.classes.mean.insert(at(out.classes.mean), mean - 0.7 * sd);
  out.classes.sd.insert(at(out.classes.sd), 0.7 * sd);
  if (!std::is_sorted(out.classes.mean.begin(), out.classes.mean.end())) std::sort(out.classes.mean.begin(), out.classes.mean.end());
  const Extent e = whole.labels.extent();
  for (int z = 0; z < e.depth; ++z) {
    for (int y = 0; y < e.height; ++y) {
      for (int x = 0; x < e.width; ++x) {
        const std::size_t k = whole.labels.at(x, y, z);
        const std::uint16_t level = grey.level.at(x, y, z);
        const bool above = level != grey.missing() && grey.value(level) > mean;
        out.labels.at(x, y, z) = static_cast<std::uint8_t>(k + (k > split || (k == split && above)));
      }
    }
  }
  return out;
}

LabelStart one_class(const GreyLevels& grey, bool shared) {
  LabelStart s{Volume<std::uint8_t>(grey.level.extent()), {}};
  double n = 0, m = 0, v = 0;
  for (int l = 0; l < grey.levels; ++l) { const double h = (double)grey.histogram[(size_t)l]; n += h; m += h * grey.value(l); }
  m /= n;
  for (int l = 0; l < grey.levels; ++l) { const double h = (double)grey.histogram[(size_t)l], d = grey.value(l) - m; v += h * d * d; }
  s.classes = {{m}, {std::sqrt(std::max(v / n, grey.step * grey.step / 12))}, shared};
  return s;
}

}  // namespace

ClassSearch search_classes(const GreyLevels& grey, const Neighbourhood& neighbourhood,
                           bool shared_variance, int most, std::uint64_t seed, const Pool& pool) {
  most = std::min(most, grey.distinct());
  const Pool serial(1);
  const bool side_by_side = grey.level.extent().sites() < kRowParallelPixels && pool.threads() > 1;
  const auto for_each = [&](int n, const std::function<void(int, const Pool&)>& body) {
    if (side_by_side) {
      pool.for_each(n, [&](int i) { body(i, serial); });
    } else {
      for (int i = 0; i < n; ++i) body(i, pool);
    }
  };
  ClassSearch search;
  std::vector<std::vector<double>> densities;
  LabelStart best;
  for (int classes = 1; classes <= most; ++classes) {
    std::vector<LabelStart> starts;
    if (classes == 1) {
      starts.push_back(one_class(grey, shared_variance));
    } else {
      for (const int radius : {1, 2}) {
        starts.push_back(smoothed_start(grey, classes, radius, shared_variance));
      }
      for (int j = 0; j + 1 < classes; ++j) starts.push_back(split_class(grey, best, (std::size_t)j));
    }
    std::vector<ClassTrial> trials(starts.size());
    TrialSettings settings;
    settings.beta = kCoupling;
    settings.folds = kParts;
    settings.fold_key = chain_key(seed, 63);
    for_each(static_cast<int>(starts.size()), [&](int i, const Pool& inner) {
      TrialSettings own = settings;
      own.settling_blocks = (int)env("S1", 15); own.counting_blocks = (int)env("C1", 8);
      own.chain_key = chain_key(seed, static_cast<std::uint32_t>(256 + 32 * classes + i));
      trials[(std::size_t)i] = try_classes(grey, neighbourhood, starts[(std::size_t)i], own, inner);
    });
    std::size_t at = 0;
    for (std::size_t i = 1; i < trials.size(); ++i) {
      if (sum_of(trials[i].log_density) > sum_of(trials[at].log_density)) at = i;
    }
    if (std::getenv("TRACE")) {
      std::printf("   K=%d starts:", classes);
      for (auto& t : trials) std::printf(" %.1f", sum_of(t.log_density));
      std::printf(" | means"); for (auto m : trials[at].end.classes.mean) std::printf(" %.2f", m);
      std::printf(" sd"); for (auto m : trials[at].end.classes.sd) std::printf(" %.2f", m);
      std::printf("\n");
    }
    best = std::move(trials[at].end);
    std::vector<ClassTrial> judged(static_cast<std::size_t>(kJudgedParts));
    for_each(kJudgedParts, [&](int i, const Pool& inner) {
      TrialSettings own = settings;
      own.settling_blocks = (int)env("S2", 12); own.counting_blocks = (int)env("C2", 12);
      own.fold = static_cast<std::uint32_t>(1 + i);
      own.chain_key = chain_key(seed, static_cast<std::uint32_t>(1024 + 32 * classes + i));
      judged[(std::size_t)i] = try_classes(grey, neighbourhood, best, own, inner);
    });
    std::vector<double> all;
    for (const ClassTrial& t : judged) all.insert(all.end(), t.log_density.begin(), t.log_density.end());
    search.tried.push_back({classes, sum_of(all) - env("PEN", 1) * 0.5 * (3 * classes - 1) * exact_log((double)all.size()), 0, 0});
    densities.push_back(std::move(all));
  }
  std::size_t top = 0;
  for (std::size_t i = 0; i < search.tried.size(); ++i) if (search.tried[i].score > search.tried[top].score) top = i;
  for (std::size_t i = 0; i < search.tried.size(); ++i) {
    double sum = 0, square = 0; const double n = (double)densities[i].size();
    for (std::size_t s = 0; s < densities[i].size(); ++s) { const double d = densities[top][s] - densities[i][s]; sum += d; square += d * d; }
    search.tried[i].below_best = search.tried[top].score - search.tried[i].score;
    search.tried[i].error = std::sqrt(std::max(0.0, square - sum * sum / n));
  }
  for (std::size_t i = search.tried.size(); i-- > 0;) {
    if (search.tried[i].below_best <= kErrors * search.tried[i].error) search.choice = search.tried[i].classes;
  }
  return search;
}

}  // namespace stillfield
