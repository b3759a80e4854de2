#include "sampler/intensity_chain.h"

#include <vector>

#include "sampler/row_pairs.h"
#include "simd/intensity_pairs.h"
#include "simd/intensity_rows.h"
#include "simd/intensity_sums.h"

namespace stillfield {
namespace {

IntensityBand field_band(const ObservedIntensity& observed, IntensityChain& chain,
                         IntensityPrior prior, int colour, int slice, int first_row, int rows) {
  const IntensityLayout& layout = *observed.layout;
  const std::size_t start = layout.element(colour, slice, 0);
  IntensityBand band = layout.band(colour, slice);
  band.first_row = first_row;
  band.rows = rows;
  band.field = chain.field.data() + start;
  band.value = (chain.value.empty() ? observed.value : chain.value).data() + start;
  band.row = observed.row.data() + layout.row_number(colour, slice, 0);
  if (prior == IntensityPrior::kEdges) {
    band.pair_precision = chain.pair_precision.data() + start;
  }
  band.strength = static_cast<float>(chain.strength);
  band.noise_precision = static_cast<float>(1.0 / chain.noise_variance);
  band.random.key = chain.key;
  band.random.sweep = chain.sweeps_done;
  return band;
}

// Rows one after the other, whatever thread has summed them.
double sum_rows(const ObservedIntensity& observed, IntensityPrior prior, const Pool& pool,
                IntensityChain& chain, void (*sum)(const IntensityBand&, double*)) {
  const IntensityLayout& layout = *observed.layout;
  const Colouring& c = layout.colouring();
  std::vector<double> of_row(layout.rows());
  for (int colour = 0; colour < c.colours(); ++colour) {
    for_row_pairs(c, colour, pool, [&](int slice, int first_row, int rows) {
      sum(field_band(observed, chain, prior, colour, slice, first_row, rows),
          of_row.data() + layout.row_number(colour, slice, 0));
    });
  }
  double total = 0.0;
  for (const double row : of_row) total += row;
  return total;
}

}  // namespace

IntensityChain start_intensity_chain(const ObservedIntensity& observed, IntensityPrior prior,
                                     PhiloxKey key, View<const float> start, double strength,
                                     double noise_variance) {
  const IntensityLayout& layout = *observed.layout;
  IntensityChain chain;
  chain.key = key;
  chain.strength = strength;
  chain.noise_variance = noise_variance;
  chain.field = AlignedBuffer<float>(layout.elements());
  layout.for_each_pixel([&](std::size_t at, int x, int y, int z) {
    chain.field[at] = static_cast<float>(start.at(x, y, z) - observed.centre);
  });
  if (prior == IntensityPrior::kEdges) {
    chain.pair_precision =
        AlignedBuffer<float>(layout.elements() * static_cast<std::size_t>(layout.pair_planes()));
  }
  return chain;
}

double sum_differences(const ObservedIntensity& observed, IntensityPrior prior, const Pool& pool,
                       IntensityChain& chain) {
  auto* const sum = prior == IntensityPrior::kSmooth ? squared_differences : absolute_differences;
  return sum_rows(observed, prior, pool, chain, sum);
}

double sum_residuals(const ObservedIntensity& observed, IntensityPrior prior, const Pool& pool,
                     IntensityChain& chain) {
  return sum_rows(observed, prior, pool, chain, squared_residuals);
}

void sweep_intensity(const ObservedIntensity& observed, IntensityPrior prior,
                     const AlignedBuffer<float>& shift, const Pool& pool, IntensityChain& chain) {
  const IntensityLayout& layout = *observed.layout;
  const Colouring& c = layout.colouring();
  const bool edges = prior == IntensityPrior::kEdges;
  const bool moments = !chain.sum.empty();
  const auto word3 = [&](Purpose purpose, int colour, std::uint32_t slice) {
    return counter_word3(purpose, static_cast<std::uint32_t>(colour), slice);
  };
  for (int colour = 0; edges && colour < c.colours(); ++colour) {
    for_row_pairs(c, colour, pool, [&](int slice, int first_row, int rows) {
      IntensityBand band = field_band(observed, chain, prior, colour, slice, first_row, rows);
      band.random.word3 = word3(Purpose::kPairScale, colour, kPairSlices * c.random_slice(slice));
      draw_pair_precisions(band);
    });
  }
  for (int colour = 0; colour < c.colours(); ++colour) {
    for_row_pairs(c, colour, pool, [&](int slice, int first_row, int rows) {
      IntensityBand band = field_band(observed, chain, prior, colour, slice, first_row, rows);
      band.random.word3 = word3(Purpose::kIntensity, colour, c.random_slice(slice));
      if (moments) {
        const std::size_t start = layout.element(colour, slice, 0);
        band.sum = chain.sum.data() + start;
        band.square = chain.square.data() + start;
        band.shift = shift.data() + start;
      }
      if (edges) {
        edges_rows(band);
      } else {
        smooth_rows(band);
      }
    });
  }
  ++chain.sweeps_done;
  if (moments) ++chain.pending;
}

void draw_intensity_parameters(const ObservedIntensity& observed, const IntensityModel& model,
                               const Pool& pool, IntensityChain& chain) {
  RandomStream random(chain.key, Purpose::kParameters, chain.sweeps_done);
  chain.strength = draw_strength(model.prior, model.strength, observed.layout->extent().sites(),
                                 sum_differences(observed, model.prior, pool, chain), random);
  if (!model.noise_scale_known) {
    chain.noise_variance = draw_noise_variance(
        model.noise, observed.observed, sum_residuals(observed, model.prior, pool, chain), random);
  }
}

}  // namespace stillfield
