#include "sampler/shaded_chain.h"

#include <algorithm>
#include <cmath>

#include "core/elementary.h"
#include "model/gaussian_draw.h"
#include "sampler/row_pairs.h"
#include "sampler/weight_layout.h"
#include "simd/exponentials.h"

namespace stillfield {
namespace {

constexpr double kMaxLogRatio = 69.07755278982137;  // ln 1e30, as in model/weight_table.cc
constexpr double kSmallestWeight = 1e-37;

// Log weights of one row of pixels, class by class, and their exponentials.
class RowWeights {
 public:
  RowWeights(const LabelModel& model, std::ptrdiff_t pixels)
      : model_(&model),
        pixels_(round_up(static_cast<std::size_t>(pixels), std::size_t{kExponentialsBatch})),
        log_weight_(pixels_ * model.classes.mean.size()),
        top_(pixels_) {}

  // log e^{alpha_k} f_k(y) of every pixel; of those where nothing is observed alpha_k.
  template <class Observed, class Value, class Light>
  void fill(std::ptrdiff_t pixels, const Observed& observed, const Value& value,
            const Light& light) {
    for (std::size_t k = 0; k < model_->classes.mean.size(); ++k) {
      const double alpha = model_->prior.alpha[k];
      const double mean = model_->classes.mean[k], sd = model_->classes.sd[k];
      const double constant = alpha - exact_log(sd), precision = 0.5 / (sd * sd);
      double* out = log_weight_.data() + k * pixels_;
      for (std::ptrdiff_t j = 0; j < pixels; ++j) {
        const double d = observed(j) ? value(j) - light(j) * mean : 0.0;
        out[j] = observed(j) ? constant - precision * d * d : alpha;
      }
    }
  }

  // Weights as in model/weight_table.h, planes `stride` apart.
  void store(std::ptrdiff_t pixels, float* out, std::ptrdiff_t stride) {
    double* first = log_weight_.data();
    const int n = static_cast<int>(pixels);
    if (model_->size() == 2) {
      for (std::ptrdiff_t j = 0; j < pixels; ++j) {
        first[j] = std::clamp(first[j] - first[pixels_ + static_cast<std::size_t>(j)],
                              -kMaxLogRatio, kMaxLogRatio);
      }
      exponentials(first, n);
      for (std::ptrdiff_t j = 0; j < pixels; ++j) out[j] = static_cast<float>(first[j]);
      return;
    }
    std::copy_n(first, pixels, top_.begin());
    for (std::size_t k = 1; k < model_->classes.mean.size(); ++k) {
      const double* w = first + k * pixels_;
      for (std::size_t j = 0; j < static_cast<std::size_t>(pixels); ++j) {
        top_[j] = std::max(top_[j], w[j]);
      }
    }
    for (std::size_t k = 0; k < model_->classes.mean.size(); ++k) {
      double* w = first + k * pixels_;
      float* plane = out + static_cast<std::ptrdiff_t>(k) * stride;
      for (std::size_t j = 0; j < static_cast<std::size_t>(pixels); ++j) w[j] -= top_[j];
      exponentials(w, n);
      for (std::ptrdiff_t j = 0; j < pixels; ++j) {
        plane[j] = w[j] < kSmallestWeight ? 0.0F : static_cast<float>(w[j]);
      }
    }
  }

 private:
  const LabelModel* model_;
  std::size_t pixels_;
  std::vector<double> log_weight_, top_;
};

int grain(const Extent& e) {
  return std::max(1, kSitesPerTask / std::max(1, e.width));
}

// Sums of one class over one row, with r = y - g (current mean).
struct RowSums {
  double n = 0.0, gg = 0.0, gr = 0.0, rr = 0.0;
};

}  // namespace

void prepare_shaded_weights(const ObservedField& field, const Shading& shading,
                            const LabelChain& chain, const Pool& pool, WeightPlanes& weights) {
  const Colouring& c = *field.colouring;
  const GreyLevels& grey = *field.grey;
  const int planes = chain.model.size() == 2 ? 1 : chain.model.size();
  weights.table.planes = planes;
  make_room_for_weights(c, weights);
  for (int colour = 0; colour < c.colours(); ++colour) {
    for_row_pairs(c, colour, pool, [&](int slice, int first_row, int rows) {
      const std::ptrdiff_t pixels = c.plane_stride();  // to the end of the padding
      RowWeights row_weights(chain.model, pixels);
      for (int row = first_row; row < first_row + rows; ++row) {
        const SurfaceRow light(shading.basis, chain.light, c.y_of(colour, row));
        const std::uint16_t* level = field.level.data() + c.plane_row(colour, slice, row);
        float* out = weights.value.data() + weight_row(c, planes, colour, slice, row);
        const int first = c.first_x(colour, slice, row);
        row_weights.fill(
            pixels, [&](std::ptrdiff_t j) { return level[j] != grey.missing(); },
            [&](std::ptrdiff_t j) { return grey.value(level[j]); },
            [&](std::ptrdiff_t j) { return light.at(first + 2 * static_cast<int>(j)); });
        row_weights.store(pixels, out, weight_plane(c));
        if (planes == 1) correct_border(c, chain.model.prior.beta, colour, slice, row, out);
      }
    });
  }
}

Volume<std::uint8_t> image_labels(const Colouring& colouring, const LabelChain& chain) {
  Volume<std::uint8_t> labels(colouring.extent());
  gather_labels(colouring, chain.labels, labels.view());
  return labels;
}

void draw_shaded_classes(const LabelPosterior& problem, const Shading& shading,
                         View<const std::uint8_t> labels, const Pool& pool, RandomStream& random,
                         LabelChain& chain) {
  const GreyLevels& grey = *problem.field.grey;
  const Extent e = grey.level.extent();
  GaussianClasses& classes = chain.model.classes;
  const std::size_t count = classes.mean.size();
  const int rows = e.height * e.depth;
  std::vector<RowSums> of_row(static_cast<std::size_t>(rows) * count);
  pool.for_bands(rows, grain(e), [&](int first, int last) {
    for (int row = first; row < last; ++row) {
      const int y = row % e.height, z = row / e.height;
      const SurfaceRow light(shading.basis, chain.light, y);
      RowSums* sums = of_row.data() + static_cast<std::size_t>(row) * count;
      for (int x = 0; x < e.width; ++x) {
        const std::uint16_t level = grey.level.at(x, y, z);
        if (level == grey.missing()) continue;
        const std::size_t k = labels.at(x, y, z);
        const double g = light.at(x);
        const double r = grey.value(level) - g * classes.mean[k];
        sums[k].n += 1.0;
        sums[k].gg += g * g;
        sums[k].gr += g * r;
        sums[k].rr += r * r;
      }
    }
  });
  std::vector<ClassMoments> moments(count);
  for (std::size_t k = 0; k < count; ++k) {
    RowSums all;
    for (std::size_t row = 0; row < static_cast<std::size_t>(rows); ++row) {
      const RowSums& s = of_row[row * count + k];
      all.n += s.n;
      all.gg += s.gg;
      all.gr += s.gr;
      all.rr += s.rr;
    }
    if (all.n == 0.0 || all.gg <= 0.0) continue;
    moments[k] = {all.n, all.gg, classes.mean[k] + all.gr / all.gg,
                  std::max(0.0, all.rr - all.gr * all.gr / all.gg)};
  }
  draw_gaussian_classes(moments, problem.prior, random, classes);
}

void draw_light(const ObservedField& field, const Shading& shading, View<const std::uint8_t> labels,
                const Pool& pool, RandomStream& random, LabelChain& chain) {
  const GreyLevels& grey = *field.grey;
  const Extent e = grey.level.extent();
  const GaussianClasses& classes = chain.model.classes;
  std::vector<double> weight_of, value_of;  // of a pixel, and of a grey value of one
  for (std::size_t k = 0; k < classes.mean.size(); ++k) {
    const double precision = 1.0 / (classes.sd[k] * classes.sd[k]);
    weight_of.push_back(classes.mean[k] * classes.mean[k] * precision);
    value_of.push_back(classes.mean[k] * precision);
  }
  SurfaceSums sums(shading.basis, e.height * e.depth);
  pool.for_bands(e.height * e.depth, grain(e), [&](int first, int last) {
    std::vector<double> weight(static_cast<std::size_t>(e.width)), value(weight.size());
    for (int row = first; row < last; ++row) {
      const int y = row % e.height, z = row / e.height;
      for (int x = 0; x < e.width; ++x) {
        const std::uint16_t level = grey.level.at(x, y, z);
        const auto i = static_cast<std::size_t>(x);
        const bool missing = level == grey.missing();
        const std::size_t k = labels.at(x, y, z);
        weight[i] = missing ? 0.0 : weight_of[k];
        value[i] = missing ? 0.0 : value_of[k] * grey.value(level);
      }
      sums.set_row(row, weight.data(), value.data());
    }
  });
  chain.light = SurfaceConditional(sums, shading.prior).draw(random);
}

void advance_shaded_chain(const LabelPosterior& problem, const Shading& shading, int sweeps,
                          const Pool& pool, WeightPlanes& weights, LabelChain& chain) {
  const Colouring& colouring = *problem.field.colouring;
  prepare_shaded_weights(problem.field, shading, chain, pool, weights);
  sweep_labels(colouring, weights, sweeps, Purpose::kLabels, pool, chain);
  total_labels(problem.field, pool, chain);
  const Volume<std::uint8_t> labels = image_labels(colouring, chain);
  RandomStream random(chain.key, Purpose::kParameters, chain.sweeps_done);
  draw_shaded_classes(problem, shading, labels.view(), pool, random, chain);
  draw_light(problem.field, shading, labels.view(), pool, random, chain);
  if (problem.log_partition) {
    chain.model.prior.beta = draw_coupling(
        *problem.log_partition, chain.totals.weighted_pairs(colouring.neighbourhood()), random);
  }
}

}  // namespace stillfield
