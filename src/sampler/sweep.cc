#include "sampler/sweep.h"

#include <cmath>
#include <mutex>

#include "core/elementary.h"
#include "sampler/row_pairs.h"
#include "sampler/weight_layout.h"
#include "simd/label_statistics.h"
#include "simd/level_lookup.h"

namespace stillfield {

void prepare_weights(const ObservedField& field, const LabelModel& model, const Pool& pool,
                     WeightPlanes& weights) {
  const Colouring& c = *field.colouring;
  fill_weight_table(*field.grey, model, weights.table);
  const int planes = weights.table.planes;
  make_room_for_weights(c, weights);
  for (int colour = 0; colour < c.colours(); ++colour) {
    for_row_pairs(c, colour, pool, [&](int slice, int first_row, int rows) {
      for (int row = first_row; row < first_row + rows; ++row) {
        const std::uint16_t* level = field.level.data() + c.plane_row(colour, slice, row);
        float* out = weights.value.data() + weight_row(c, planes, colour, slice, row);
        look_up_weights(weights.table.value.data(), planes, weights.table.levels, level,
                        c.plane_stride(), out, weight_plane(c));
        if (planes == 1) correct_border(c, model.prior.beta, colour, slice, row, out);
      }
    });
  }
}

void fill_ring_tables(const Neighbourhood& neighbourhood, double beta, bool two_labels,
                      LabelBand& band) {
  for (std::size_t r = 0; r < neighbourhood.rings.size(); ++r) {
    Ring& ring = band.rings[r];
    const double step = beta * neighbourhood.rings[r].weight;
    for (int n = 0; n <= ring.neighbours; ++n) {
      const double exponent = two_labels ? step * (ring.neighbours - 2 * n) : step * n;
      ring.table[static_cast<std::size_t>(n)] = static_cast<float>(exact_exp(exponent));
    }
  }
}

void sweep_labels(const Colouring& c, const WeightPlanes& weights, int sweeps, Purpose purpose,
                  const Pool& pool, LabelChain& chain) {
  const bool two_labels = chain.model.size() == 2;
  const bool counting = !chain.visits.empty();
  const int planes = weights.table.planes;
  for (int s = 0; s < sweeps; ++s) {
    for (int colour = 0; colour < c.colours(); ++colour) {
      for_row_pairs(c, colour, pool, [&](int slice, int first_row, int rows) {
        LabelBand band = c.band(colour, slice);
        fill_ring_tables(c.neighbourhood(), chain.model.prior.beta, two_labels, band);
        band.classes = chain.model.size();
        band.first_row = first_row;
        band.rows = rows;
        band.labels = chain.labels.data() + c.label_row(colour, slice, 0);
        band.weights = weights.value.data() + weight_row(c, planes, colour, slice, 0);
        band.weight_plane = weight_plane(c);
        band.weight_stride = planes * weight_plane(c);
        band.counts = counting ? chain.visits.data() + c.plane_row(colour, slice, 0) : nullptr;
        band.random.key = chain.key;
        band.random.sweep = chain.sweeps_done;
        band.random.word3 =
            counter_word3(purpose, static_cast<std::uint32_t>(colour), c.random_slice(slice));
        if (two_labels) {
          two_label_rows(band);
        } else {
          label_rows(band);
        }
      });
    }
    ++chain.sweeps_done;
    if (counting) ++chain.visits_pending;
  }
}

void total_labels(const ObservedField& field, const Pool& pool, LabelChain& chain) {
  const Colouring& c = *field.colouring;
  const int classes = chain.model.size();
  LabelSums all(classes);
  std::mutex merging;  // sums are integers: the order of merging does not matter
  for (int colour = 0; colour < c.colours(); ++colour) {
    for_row_pairs(c, colour, pool, [&](int slice, int first_row, int rows) {
      LabelBand band = c.band(colour, slice);
      band.classes = classes;
      band.first_row = first_row;
      band.rows = rows;
      band.labels = chain.labels.data() + c.label_row(colour, slice, 0);
      LabelSums part(classes);
      sum_label_rows(band, field.level.data() + c.plane_row(colour, slice, 0),
                     field.grey->missing(), part);
      const std::lock_guard<std::mutex> lock(merging);
      all.add(part);
    });
  }
  chain.totals.classes.resize(static_cast<std::size_t>(classes));
  for (std::size_t k = 0; k < static_cast<std::size_t>(classes); ++k) {
    chain.totals.classes[k] = {all.sites[k], all.observed[k], all.level_sum[k],
                               all.level_square_sum[k]};
  }
  chain.totals.equal_pairs.resize(c.neighbourhood().rings.size());
  for (std::size_t r = 0; r < chain.totals.equal_pairs.size(); ++r) {
    chain.totals.equal_pairs[r] = all.equal_ends[r] / 2;
  }
}

void advance_chain(const LabelPosterior& problem, int sweeps, const Pool& pool,
                   WeightPlanes& weights, LabelChain& chain) {
  const Colouring& colouring = *problem.field.colouring;
  prepare_weights(problem.field, chain.model, pool, weights);
  sweep_labels(colouring, weights, sweeps, Purpose::kLabels, pool, chain);
  total_labels(problem.field, pool, chain);
  RandomStream random(chain.key, Purpose::kParameters, chain.sweeps_done);
  draw_gaussian_classes(*problem.field.grey, chain.totals.classes, problem.prior, random,
                        chain.model.classes);
  if (problem.log_partition) {
    chain.model.prior.beta = draw_coupling(
        *problem.log_partition, chain.totals.weighted_pairs(colouring.neighbourhood()), random);
  }
}

}  // namespace stillfield
