#include "model/weight_table.h"

#include <algorithm>

#include "core/elementary.h"

namespace stillfield {
namespace {

constexpr double kMaxLogRatio = 69.07755278982137;  // ln 1e30

}  // namespace

void fill_weight_table(const GreyLevels& grey, const LabelModel& model, WeightTable& table) {
  const int classes = model.size();
  const auto count = static_cast<std::size_t>(classes);
  table.planes = classes == 2 ? 1 : classes;
  table.levels = grey.levels + 1;
  table.value.resize(static_cast<std::size_t>(table.planes) * table.levels);

  std::vector<double> constant(count), precision(count), log_weight(count);
  for (std::size_t k = 0; k < count; ++k) {
    const double sd = model.classes.sd[k];
    constant[k] = model.prior.alpha[k] - exact_log(sd);
    precision[k] = 0.5 / (sd * sd);
  }
  const auto store = [&](int level) {
    if (classes == 2) {
      const double ratio = std::clamp(log_weight[0] - log_weight[1], -kMaxLogRatio, kMaxLogRatio);
      table.value[static_cast<std::size_t>(level)] = static_cast<float>(exact_exp(ratio));
      return;
    }
    const double top = *std::max_element(log_weight.begin(), log_weight.end());
    for (std::size_t k = 0; k < count; ++k) {
      const double weight = exact_exp(log_weight[k] - top);
      // Far tails are cut before they become subnormal floats, which are slow to multiply.
      table.value[k * table.levels + static_cast<std::size_t>(level)] =
          weight < 1e-37 ? 0.0f : static_cast<float>(weight);
    }
  };
  for (int l = 0; l < grey.levels; ++l) {
    if (grey.histogram[static_cast<std::size_t>(l)] == 0) continue;
    for (std::size_t k = 0; k < count; ++k) {
      const double d = grey.value(l) - model.classes.mean[k];
      log_weight[k] = constant[k] - precision[k] * d * d;
    }
    store(l);
  }
  for (std::size_t k = 0; k < count; ++k) log_weight[k] = model.prior.alpha[k];
  store(grey.levels);
}

}  // namespace stillfield
