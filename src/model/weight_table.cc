#include "model/weight_table.h"

#include <algorithm>
#include <array>

#include "core/elementary.h"
#include "simd/exponentials.h"

namespace stillfield {
namespace {

constexpr double kMaxLogRatio = 69.07755278982137;  // ln 1e30
constexpr int kBatch = 256;                         // levels at a time
static_assert(kBatch % kExponentialsBatch == 0);

// Log weights of a batch of levels turned into entries of the table.
class Batch {
 public:
  Batch(const LabelModel& model, WeightTable& table)
      : model_(model),
        table_(table),
        log_weight_(static_cast<std::size_t>(model.size()) * kBatch) {}

  bool full() const { return size_ == kBatch; }

  // Room for the log weights of `level`, kBatch apart from class to class.
  double* add(int level) {
    level_[static_cast<std::size_t>(size_)] = level;
    return log_weight_.data() + size_++;
  }

  void store() {
    if (model_.size() == 2) {
      store_ratios();
    } else {
      store_weights();
    }
    size_ = 0;
  }

 private:
  void store_ratios() {
    double* ratio = log_weight_.data();
    for (int i = 0; i < size_; ++i) {
      ratio[i] = std::clamp(ratio[i] - ratio[kBatch + i], -kMaxLogRatio, kMaxLogRatio);
    }
    exponentials(ratio, size_);
    for (int i = 0; i < size_; ++i) put(0, i, static_cast<float>(ratio[i]));
  }

  void store_weights() {
    const int classes = model_.size();
    std::array<double, kBatch> top;
    std::copy_n(log_weight_.data(), size_, top.begin());
    for (int k = 1; k < classes; ++k) {
      const double* w = log_weight_.data() + k * kBatch;
      for (int i = 0; i < size_; ++i) {
        top[static_cast<std::size_t>(i)] = std::max(top[static_cast<std::size_t>(i)], w[i]);
      }
    }
    for (int k = 0; k < classes; ++k) {
      double* w = log_weight_.data() + k * kBatch;
      for (int i = 0; i < size_; ++i) w[i] -= top[static_cast<std::size_t>(i)];
      exponentials(w, size_);
      // Far tails are cut before they become subnormal floats, which are slow to multiply.
      for (int i = 0; i < size_; ++i) put(k, i, w[i] < 1e-37 ? 0.0f : static_cast<float>(w[i]));
    }
  }

  void put(int plane, int i, float weight) {
    table_.value[static_cast<std::size_t>(plane) * static_cast<std::size_t>(table_.levels) +
                 static_cast<std::size_t>(level_[static_cast<std::size_t>(i)])] = weight;
  }

  const LabelModel& model_;
  WeightTable& table_;
  std::vector<double> log_weight_;  // [class * kBatch + i]
  std::array<int, kBatch> level_;
  int size_ = 0;
};

}  // namespace

void fill_weight_table(const GreyLevels& grey, const LabelModel& model, WeightTable& table) {
  const int classes = model.size();
  const auto count = static_cast<std::size_t>(classes);
  table.planes = classes == 2 ? 1 : classes;
  table.levels = grey.levels + 1;
  table.value.resize(static_cast<std::size_t>(table.planes) * table.levels);

  std::vector<double> constant(count), precision(count);
  for (std::size_t k = 0; k < count; ++k) {
    const double sd = model.classes.sd[k];
    constant[k] = model.prior.alpha[k] - exact_log(sd);
    precision[k] = 0.5 / (sd * sd);
  }
  Batch batch(model, table);
  for (int l = 0; l < grey.levels; ++l) {
    if (grey.histogram[static_cast<std::size_t>(l)] == 0) continue;
    double* log_weight = batch.add(l);
    for (std::size_t k = 0; k < count; ++k) {
      const double d = grey.value(l) - model.classes.mean[k];
      log_weight[k * kBatch] = constant[k] - precision[k] * d * d;
    }
    if (batch.full()) batch.store();
  }
  double* missing = batch.add(grey.levels);
  for (std::size_t k = 0; k < count; ++k) missing[k * kBatch] = model.prior.alpha[k];
  batch.store();
}

}  // namespace stillfield
