#include "diagnose/class_facts.h"

#include <cmath>

#include "diagnose/check_sentences.h"
#include "diagnose/normal_probability.h"

namespace stillfield {
namespace {

constexpr double kLeastContrast = 0.75, kNoContrast = 0.4;
constexpr double kLeastPersistence = 0.6, kNoPersistence = 0.4;
constexpr double kLeastShare = 0.0005;
constexpr double kMostSaturated = 0.05, kHopelesslySaturated = 0.25;
constexpr double kMostUncertain = 0.3, kHopelesslyUncertain = 0.6;
constexpr double kMostMissing = 0.2, kHopelesslyMissing = 0.5;

ModelCheck fact(const char* name, int label, double value, double limit) {
  ModelCheck check;
  check.name = name;
  check.label = label;
  check.value = value;
  check.limit = limit;
  return check;
}

void judge(ModelCheck& check, bool failed, bool grave) {
  check.failed = failed;
  check.grave = failed && grave;
  if (failed) check.sentence = check_sentence(check);
}

// Of the grey level `level`, where it is the end of the scale of an unlimited distribution.
double normal_share(const GreyLevels& grey, int level, double mean, double sd) {
  const double middle = grey.value(level), half = grey.step / 2;
  return normal_probability((middle + half - mean) / sd) -
         normal_probability((middle - half - mean) / sd);
}

}  // namespace

std::vector<ModelCheck> contrast_facts(const GaussianClasses& classes) {
  std::vector<ModelCheck> facts;
  for (std::size_t k = 0; k + 1 < classes.mean.size(); ++k) {
    const double noise =
        std::sqrt((classes.sd[k] * classes.sd[k] + classes.sd[k + 1] * classes.sd[k + 1]) / 2);
    const double contrast = (classes.mean[k + 1] - classes.mean[k]) / noise;
    facts.push_back(fact("class_contrast", static_cast<int>(k) + 1, contrast, kLeastContrast));
    judge(facts.back(), contrast < kLeastContrast, contrast < kNoContrast);
  }
  return facts;
}

std::vector<ModelCheck> support_facts(const GreyLevels& grey, int label,
                                      const Volume<float>& probability) {
  double sum = 0, square = 0;
  for (int z = 0; z < probability.depth(); ++z) {
    for (int y = 0; y < probability.height(); ++y) {
      const float* row = probability.row(y, z);
      double row_sum = 0, row_square = 0;
      const std::uint16_t* level = grey.level.row(y, z);
      for (int x = 0; x < probability.width(); ++x) {
        if (level[x] == grey.missing()) continue;
        row_sum += row[x];
        row_square += static_cast<double>(row[x]) * row[x];
      }
      sum += row_sum;
      square += row_square;
    }
  }
  const double share = sum / static_cast<double>(grey.observed);
  const double stays = square / sum;  // NaN for a class that never was
  std::vector<ModelCheck> facts = {fact("class_share", label, share, kLeastShare),
                                   fact("class_persistence", label, stays, kLeastPersistence)};
  judge(facts[0], share < kLeastShare, false);
  judge(facts[1], stays < kLeastPersistence, stays < kNoPersistence);
  return facts;
}

std::vector<ModelCheck> saturation_facts(const GreyLevels& grey, View<const std::uint8_t> labels,
                                         const GaussianClasses& classes) {
  const std::size_t count = classes.mean.size();
  std::vector<std::int64_t> all(count), lowest(count), highest(count);
  for (int z = 0; z < labels.depth(); ++z) {
    for (int y = 0; y < labels.height(); ++y) {
      for (int x = 0; x < labels.width(); ++x) {
        const std::uint16_t level = grey.level.at(x, y, z);
        if (level == grey.missing()) continue;
        const auto k = static_cast<std::size_t>(labels.at(x, y, z) - 1);
        ++all[k];
        lowest[k] += level == 0 ? 1 : 0;
        highest[k] += level == grey.levels - 1 ? 1 : 0;
      }
    }
  }
  std::vector<ModelCheck> facts;
  for (std::size_t k = 0; k < count; ++k) {
    if (all[k] == 0) continue;
    const bool low = lowest[k] >= highest[k];
    const double share =
        static_cast<double>(low ? lowest[k] : highest[k]) / static_cast<double>(all[k]);
    ModelCheck check = fact("saturation", static_cast<int>(k) + 1, share, kMostSaturated);
    check.expected = normal_share(grey, low ? 0 : grey.levels - 1, classes.mean[k], classes.sd[k]);
    const double excess = share - check.expected;
    judge(check, excess > kMostSaturated, excess > kHopelesslySaturated);
    facts.push_back(std::move(check));
  }
  return facts;
}

std::vector<ModelCheck> share_facts(const GreyLevels& grey, std::int64_t region_pixels,
                                    double uncertain_share) {
  const double missing =
      1.0 - static_cast<double>(grey.observed) / static_cast<double>(region_pixels);
  std::vector<ModelCheck> facts = {fact("uncertain_pixels", 0, uncertain_share, kMostUncertain),
                                   fact("missing_pixels", 0, missing, kMostMissing)};
  judge(facts[0], uncertain_share > kMostUncertain, uncertain_share > kHopelesslyUncertain);
  judge(facts[1], missing > kMostMissing, missing > kHopelesslyMissing);
  return facts;
}

}  // namespace stillfield
