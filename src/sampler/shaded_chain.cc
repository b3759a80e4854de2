#include "sampler/shaded_chain.h"

#include <algorithm>
#include <cmath>

#include "core/elementary.h"
#include "model/gaussian_draw.h"
#include "sampler/row_pairs.h"
#include "sampler/weight_layout.h"

namespace stillfield {
namespace {

constexpr double kMaxLogRatio = 69.07755278982137;  // ln 1e30, as in model/weight_table.cc
constexpr double kSmallestWeight = 1e-37;

// log e^{alpha_k} f_k of one pixel: constant - precision (y - g mean)^2.
struct ClassTerms {
  explicit ClassTerms(const LabelModel& model)
      : alpha(model.prior.alpha), mean(model.classes.mean), log_weight(mean.size()) {
    for (std::size_t k = 0; k < mean.size(); ++k) {
      const double sd = model.classes.sd[k];
      constant.push_back(alpha[k] - exact_log(sd));
      precision.push_back(0.5 / (sd * sd));
    }
  }
  void observe(double y, double g) {
    for (std::size_t k = 0; k < mean.size(); ++k) {
      const double d = y - g * mean[k];
      log_weight[k] = constant[k] - precision[k] * d * d;
    }
  }
  void observe_nothing() { log_weight = alpha; }
  // Weights at out[k * stride], as model/weight_table.h.
  void store(float* out, std::ptrdiff_t stride) const {
    if (mean.size() == 2) {
      const double ratio = log_weight[0] - log_weight[1];
      *out = static_cast<float>(exact_exp(std::clamp(ratio, -kMaxLogRatio, kMaxLogRatio)));
      return;
    }
    const double top = *std::max_element(log_weight.begin(), log_weight.end());
    for (std::size_t k = 0; k < mean.size(); ++k) {
      const double weight = exact_exp(log_weight[k] - top);
      out[static_cast<std::ptrdiff_t>(k) * stride] =
          weight < kSmallestWeight ? 0.0F : static_cast<float>(weight);
    }
  }
  std::vector<double> alpha, mean, constant, precision, log_weight;
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
      ClassTerms terms(chain.model);
      for (int row = first_row; row < first_row + rows; ++row) {
        const SurfaceRow light(shading.basis, chain.light, c.y_of(colour, row));
        const std::uint16_t* level = field.level.data() + c.plane_row(colour, slice, row);
        float* out = weights.value.data() + weight_row(c, planes, colour, slice, row);
        const int first = c.first_x(colour, slice, row);
        const int sites = c.sites(colour, slice, row);
        for (int j = 0; j < c.plane_stride(); ++j) {  // to the end of the padding
          if (j >= sites || level[j] == grey.missing()) {
            terms.observe_nothing();
          } else {
            terms.observe(grey.value(level[j]), light.at(first + 2 * j));
          }
          terms.store(out + j, weight_plane(c));
        }
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
