#include "diagnose/predictive_checks.h"

#include <algorithm>
#include <cmath>

#include "diagnose/border_pull.h"
#include "diagnose/check_sentences.h"
#include "diagnose/local_noise.h"
#include "diagnose/residual_histogram.h"
#include "diagnose/slow_trend.h"

namespace stillfield {
namespace {

constexpr double kNever = 1e9;
constexpr double kVisibleNoise = 0.5;  // grey levels

struct Sums {
  Sums(const Extent& extent, int classes) : local(classes), histogram(classes), trend(extent) {}
  void add(const ResidualBlock& block, const GaussianClasses& classes) {
    local.add(block);
    histogram.add(block);
    trend.add(block);
    border.add(block, classes);
  }
  LocalNoise local;
  ResidualHistogram histogram;
  SlowTrend trend;
  BorderPull border;
};

}  // namespace

PredictiveChecks::PredictiveChecks(const GreyLevels& grey, int chains, int draws_a_chain,
                                   std::uint64_t image_seed, const Volume<float>* light)
    : grey_(grey),
      light_(light),
      stride_(std::max(1, chains * draws_a_chain / kCheckedDraws)),
      chains_(chains),
      kept_a_chain_((draws_a_chain + stride_ - 1) / stride_),
      seed_(image_seed),
      blocks_(residual_blocks(grey.level.extent())),
      comparisons_(static_cast<std::size_t>(chains_ * kept_a_chain_)) {}

void PredictiveChecks::show(int chain, int draw, View<const std::uint8_t> labels,
                            const GaussianClasses& classes) {
  if (draw % stride_ != 0 || draw / stride_ >= kept_a_chain_) return;
  Comparison& out = comparisons_[static_cast<std::size_t>(chain * kept_a_chain_ + draw / stride_)];
  const int count = static_cast<int>(classes.mean.size());
  Sums image(grey_.level.extent(), count), replicate(grey_.level.extent(), count);
  const PhiloxKey key = chain_key(seed_, static_cast<std::uint32_t>(chain));
  for (const ResidualBlock& place : blocks_) {
    ResidualBlock block = place;
    mark_labels(labels, grey_, block);
    observed_residuals(grey_, classes, block, light_);
    image.add(block, classes);
    replicated_residuals(grey_, classes, key, static_cast<std::uint32_t>(draw), block, light_);
    replicate.add(block, classes);
  }
  const auto finish = [&](const Sums& sums) {
    const HistogramDistance distance = sums.histogram.distance(grey_, classes);
    return Discrepancies{sums.local.spread(),        sums.local.along_x(), sums.local.along_y(),
                         distance.distance,          sums.trend.share(),   sums.border.pull(),
                         sums.histogram.far_share(), distance.label};
  };
  out.image = finish(image);
  out.replicate = finish(replicate);
  out.inner_pixels = static_cast<double>(image.histogram.pixels());
  out.border_pixels = static_cast<double>(image.border.pixels());
  out.noise_visible =
      *std::min_element(classes.sd.begin(), classes.sd.end()) > kVisibleNoise * grey_.step;
}

double PredictiveChecks::mean_of(double Comparison::*member) const {
  double sum = 0;
  for (const Comparison& c : comparisons_) sum += c.*member;
  return sum / static_cast<double>(comparisons_.size());
}

ModelCheck PredictiveChecks::one_sided(const char* name, double Discrepancies::*member) const {
  ModelCheck check;
  check.name = name;
  double image = 0, replicate = 0, reached = 0;
  for (const Comparison& c : comparisons_) {
    image += c.image.*member;
    replicate += c.replicate.*member;
    reached += c.replicate.*member >= c.image.*member ? 1 : 0;
  }
  const auto n = static_cast<double>(comparisons_.size());
  check.value = image / n;
  check.expected = replicate / n;
  check.p_value = (1 + reached) / (1 + n);
  return check;
}

// Both directions are measured from what the model gives, and the one further off counts.
ModelCheck PredictiveChecks::correlation() const {
  ModelCheck check;
  check.name = "noise_correlation";
  const auto n = static_cast<double>(comparisons_.size());
  double x = 0, y = 0, centre_x = 0, centre_y = 0;
  for (const Comparison& c : comparisons_) {
    x += c.image.along_x / n;
    y += c.image.along_y / n;
    centre_x += c.replicate.along_x / n;
    centre_y += c.replicate.along_y / n;
  }
  const auto departure = [&](const Discrepancies& d) {
    return std::max(std::fabs(d.along_x - centre_x), std::fabs(d.along_y - centre_y));
  };
  double reached = 0;
  for (const Comparison& c : comparisons_) {
    reached += departure(c.replicate) >= departure(c.image) ? 1 : 0;
  }
  const bool along_x = std::fabs(x - centre_x) >= std::fabs(y - centre_y);
  check.value = along_x ? x : y;
  check.expected = along_x ? centre_x : centre_y;
  check.p_value = (1 + reached) / (1 + n);
  return check;
}

int PredictiveChecks::most_distant_class() const {
  std::vector<int> votes(256);
  for (const Comparison& c : comparisons_) {
    ++votes[static_cast<std::size_t>(c.image.distant_class)];
  }
  return static_cast<int>(std::max_element(votes.begin(), votes.end()) - votes.begin());
}

void PredictiveChecks::judge(ModelCheck& check, double limit, double grave_limit,
                             double pixels) const {
  check.limit = limit;
  const bool checked =
      pixels >= kFewestCheckedPixels && std::isfinite(check.value) && std::isfinite(check.expected);
  if (!checked) {
    check.p_value = std::numeric_limits<double>::quiet_NaN();
    return;
  }
  const double least_p = 1.0 / (1.0 + static_cast<double>(comparisons_.size()));
  double excess = check.value - check.expected;
  if (check.name == std::string("noise_correlation")) excess = std::fabs(excess);
  check.failed = check.p_value <= std::max(kCheckLevel, least_p) && excess > limit;
  check.grave = check.failed && excess > grave_limit;
  if (check.failed) check.sentence = check_sentence(check);
}

std::vector<ModelCheck> PredictiveChecks::results() const {
  double inner = mean_of(&Comparison::inner_pixels);
  const bool visible = std::all_of(comparisons_.begin(), comparisons_.end(),
                                   [](const Comparison& c) { return c.noise_visible; });
  if (!visible) inner = 0;  // nothing is said about noise that rounding hides
  const double border = mean_of(&Comparison::border_pixels);
  std::vector<ModelCheck> all;
  const auto add = [&](ModelCheck check, double limit, double grave, double pixels) {
    judge(check, limit, grave, pixels);
    all.push_back(std::move(check));
  };
  add(one_sided("noise_level", &Discrepancies::spread), 0.10, 0.50, inner);
  add(correlation(), 0.03, 0.15, inner);
  ModelCheck distribution = one_sided("noise_distribution", &Discrepancies::distance);
  distribution.label = most_distant_class();
  add(std::move(distribution), 0.02, 0.12, inner);
  add(one_sided("slow_trend", &Discrepancies::trend), 0.01, 0.10, inner);
  add(one_sided("border_mixing", &Discrepancies::pull), 0.08, kNever, border);
  add(one_sided("stray_values", &Discrepancies::far), 0.001, 0.02, inner);
  return all;
}

}  // namespace stillfield
