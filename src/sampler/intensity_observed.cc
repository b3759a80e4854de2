#include "sampler/intensity_observed.h"

#include <cmath>

#include "core/error.h"

namespace stillfield {
namespace {

bool is_observed(float variance) {
  return std::isfinite(variance);
}

// One array for all rows with the same content.
const float* shared_row(std::vector<float> row, ObservedIntensity& observed) {
  const auto [at, is_new] = observed.shared_rows.try_emplace(std::move(row));
  if (is_new) {
    at->second = AlignedBuffer<float>(at->first.size());
    for (std::size_t i = 0; i < at->first.size(); ++i) at->second[i] = at->first[i];
  }
  return at->second.data();
}

void check_pixel(float value, float variance) {
  if (!(variance > 0.0f)) {
    throw Error(ErrorKind::kInput,
                "the noise variance of a pixel is not greater than 0; give a positive noise level");
  }
  if (is_observed(variance) && !std::isfinite(value)) {
    throw Error(ErrorKind::kInput,
                "a pixel that is not marked as missing has no finite value; mask it out");
  }
}

// Which neighbours lie outside depends on these alone.
std::vector<float> row_of_weights(const IntensityLayout& layout, int colour, int slice, int row) {
  const Colouring& c = layout.colouring();
  std::vector<float> weights(static_cast<std::size_t>(layout.columns()));
  for (int j = 0; j < c.sites(colour, slice, row); ++j) {
    weights[static_cast<std::size_t>(j)] = static_cast<float>(layout.total_weight(
        c.first_x(colour, slice, row) + 2 * j, c.y_of(colour, row), c.z_of(colour, slice)));
  }
  return weights;
}

void plan_rows(ObservedIntensity& observed) {
  const IntensityLayout& layout = *observed.layout;
  const Colouring& c = layout.colouring();
  observed.row.resize(layout.rows());
  for (int colour = 0; colour < c.colours(); ++colour) {
    for (int slice = 0; slice < c.slices(colour); ++slice) {
      for (int row = 0; row < c.rows(colour); ++row) {
        IntensityRow& plan = observed.row[layout.row_number(colour, slice, row)];
        plan.total_weight = shared_row(row_of_weights(layout, colour, slice, row), observed);
        const float* p = observed.precision.data() + layout.element(colour, slice, row);
        const int sites = c.sites(colour, slice, row);
        bool same = true;
        for (int j = 1; j < sites && same; ++j) same = p[j] == p[0];
        plan.precision = same ? shared_row({p, p + layout.columns()}, observed) : p;
      }
    }
  }
}

}  // namespace

ObservedIntensity observe_intensity(const IntensityLayout& layout, View<const float> value,
                                    View<const float> variance) {
  ObservedIntensity observed;
  observed.layout = &layout;
  double sum = 0.0;
  layout.for_each_pixel([&](std::size_t, int x, int y, int z) {
    check_pixel(value.at(x, y, z), variance.at(x, y, z));
    if (!is_observed(variance.at(x, y, z))) return;
    ++observed.observed;
    sum += static_cast<double>(value.at(x, y, z));
  });
  if (observed.observed == 0) {
    throw Error(ErrorKind::kInput, "every pixel is missing, so there is nothing to restore");
  }
  observed.centre = sum / static_cast<double>(observed.observed);
  observed.value = AlignedBuffer<float>(layout.elements());
  observed.precision = AlignedBuffer<float>(layout.elements());
  layout.for_each_pixel([&](std::size_t at, int x, int y, int z) {
    if (is_observed(variance.at(x, y, z))) {
      observed.precision[at] = 1.0f / variance.at(x, y, z);
    }
  });
  centre_values(observed, value, observed.value);
  plan_rows(observed);
  return observed;
}

void centre_values(const ObservedIntensity& observed, View<const float> value,
                   AlignedBuffer<float>& plane) {
  observed.layout->for_each_pixel([&](std::size_t at, int x, int y, int z) {
    if (observed.precision[at] > 0.0f) {
      plane[at] = static_cast<float>(static_cast<double>(value.at(x, y, z)) - observed.centre);
    }
  });
}

}  // namespace stillfield
