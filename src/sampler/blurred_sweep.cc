#include "sampler/blurred_sweep.h"

#include <algorithm>
#include <array>

#include "core/elementary.h"
#include "random/counters.h"
#include "simd/label_band.h"

namespace stillfield {
namespace {

constexpr double kNegligible = -23.0;
constexpr int kWindow = 2 * kLargestBlurRadius + 1;

struct Neighbour {
  std::ptrdiff_t x;
  int y;
  double weight;  // beta w
};

// Everything that stays the same during a sweep.
struct Sweep {
  std::size_t classes = 0;
  bool own_variance = false;
  std::array<double, kMaxLabels> mean{}, precision{}, log_sd{}, alpha{};
  std::vector<Neighbour> neighbours;
  std::vector<float> kernel;
  int radius = 0;
};

Sweep prepare(const Neighbourhood& neighbourhood, const LabelModel& model,
              const BlurredField& field) {
  Sweep s;
  const LevelClasses classes = level_classes(*field.grey, model.classes);
  s.classes = classes.mean.size();
  for (std::size_t k = 0; k < s.classes; ++k) {
    s.mean[k] = classes.mean[k];
    s.precision[k] = classes.precision[k];
    s.log_sd[k] = -0.5 * exact_log(classes.precision[k]);
    s.alpha[k] = model.prior.alpha[k];
    s.own_variance = s.own_variance || classes.precision[k] != classes.precision[0];
  }
  for (const NeighbourRing& ring : neighbourhood.rings) {
    for (const Displacement& d : ring.neighbours) {
      s.neighbours.push_back({d.x, d.y, model.prior.beta * ring.weight});
    }
  }
  s.kernel.assign(field.kernel.value.begin(), field.kernel.value.end());
  s.radius = field.kernel.radius;
  return s;
}

// The mean at (x, y) grew by `step`: the windows of rho and c follow, with the precisions as the
// labels still say.
void change_mean(const Sweep& sweep, int x, int y, double step, BlurredField& f) {
  const int r = sweep.radius;
  const int window = 2 * r + 1;
  const float* h = sweep.kernel.data();
  std::array<float, 2 * kWindow> along{};
  for (int j = 0; j < window; ++j) {
    const int ty = y + j - r;
    const float* relative = f.relative.row(ty) + x - r;
    const std::uint8_t* label = f.labels.row(ty) + x - r;
    float* residual = f.residual.row(ty) + x - r;
    const float down = static_cast<float>(-step) * h[j];
    std::fill_n(along.begin(), 4 * r + 1, 0.0F);
    for (int i = 0; i < window; ++i) {
      const float d = down * h[i];
      residual[i] += d;
      if (relative[i] == 0.0F) continue;
      const float e = relative[i] * static_cast<float>(sweep.precision[label[i]]) * d;
      for (int m = 0; m < window; ++m) along[static_cast<std::size_t>(i + m)] += h[m] * e;
    }
    for (int m = 0; m < window; ++m) {
      float* slope = f.slope.row(ty + m - r) + x - 2 * r;
      for (int i = 0; i < 4 * r + 1; ++i) slope[i] += h[m] * along[static_cast<std::size_t>(i)];
    }
  }
}

// P at (x, y) grew by `gain`: the windows of c and q follow.
void change_precision(const Sweep& sweep, int x, int y, double gain, BlurredField& f) {
  const int r = sweep.radius;
  const int window = 2 * r + 1;
  const float* h = sweep.kernel.data();
  const auto g = static_cast<float>(gain);
  const float pull = g * f.residual.row(y)[x];
  for (int j = 0; j < window; ++j) {
    float* slope = f.slope.row(y + j - r) + x - r;
    float* curvature = f.curvature.row(y + j - r) + x - r;
    for (int i = 0; i < window; ++i) {
      const float hh = h[j] * h[i];
      slope[i] += pull * hh;
      curvature[i] += g * hh * hh;
    }
  }
}

}  // namespace

std::int64_t sweep_blurred(const Neighbourhood& neighbourhood, const LabelModel& model,
                           PhiloxKey key, std::uint32_t number, BlurredField& field) {
  const Sweep sweep = prepare(neighbourhood, model, field);
  const Extent e = field.labels.extent();
  const double centre = static_cast<double>(sweep.kernel[static_cast<std::size_t>(sweep.radius)]) *
                        static_cast<double>(sweep.kernel[static_cast<std::size_t>(sweep.radius)]);
  const std::uint32_t word3 = counter_word3(Purpose::kBlurredLabels, 0, 0);
  std::array<double, kMaxLabels> odds{};
  std::array<double, 256> agreement{};  // by neighbouring label; guards count for none
  std::int64_t changes = 0;
  for (int y = 0; y < e.height; ++y) {
    std::uint8_t* label = field.labels.row(y);
    const float* relative = field.relative.row(y);
    const float* residual = field.residual.row(y);
    const float* slope = field.slope.row(y);
    const float* curvature = field.curvature.row(y);
    PhiloxCounter words{};
    for (int x = 0; x < e.width; ++x) {
      if ((x & 3) == 0) {
        words = philox4x32(
            {static_cast<std::uint32_t>(x) >> 2, static_cast<std::uint32_t>(y), number, word3},
            key);
      }
      for (std::size_t k = 0; k < sweep.classes; ++k) agreement[k] = 0.0;
      for (const Neighbour& n : sweep.neighbours) {
        agreement[field.labels.row(y + n.y)[x + n.x]] += n.weight;
      }
      const std::size_t a = label[x];
      const double c = static_cast<double>(slope[x]), q = static_cast<double>(curvature[x]);
      const double w = static_cast<double>(relative[x]), rho = static_cast<double>(residual[x]);
      double largest = 0.0;
      for (std::size_t k = 0; k < sweep.classes; ++k) {
        const double d = sweep.mean[k] - sweep.mean[a];
        double v =
            sweep.alpha[k] - sweep.alpha[a] + agreement[k] - agreement[a] + d * (c - 0.5 * d * q);
        if (sweep.own_variance && w > 0.0) {
          const double r = rho - centre * d;
          v += sweep.log_sd[a] - sweep.log_sd[k] -
               0.5 * w * (sweep.precision[k] - sweep.precision[a]) * r * r;
        }
        odds[k] = v;
        largest = std::max(largest, v);
      }
      double total = 0.0;
      for (std::size_t k = 0; k < sweep.classes; ++k) {
        const double v = odds[k] - largest;
        odds[k] = v == 0.0 ? 1.0 : (v < kNegligible ? 0.0 : exact_exp(v));
        total += odds[k];
      }
      if (odds[a] == total) continue;  // nothing else to take
      const double u =
          (static_cast<double>(words[static_cast<std::size_t>(x & 3)]) + 0.5) * 0x1p-32 * total;
      std::size_t k = 0;
      double sum = odds[0];
      while (k + 1 < sweep.classes && u >= sum) sum += odds[++k];
      while (odds[k] == 0.0) --k;  // rounding may leave u at the total
      if (k == a) continue;
      const double gain = w * (sweep.precision[k] - sweep.precision[a]);
      change_mean(sweep, x, y, sweep.mean[k] - sweep.mean[a], field);
      label[x] = static_cast<std::uint8_t>(k);
      if (gain != 0.0) change_precision(sweep, x, y, gain, field);
      ++changes;
    }
  }
  return changes;
}

}  // namespace stillfield
