#include "simd/intensity_sums.h"

#undef HWY_TARGET_INCLUDE
#define HWY_TARGET_INCLUDE "simd/intensity_sums.cc"
#include <hwy/foreach_target.h>
// foreach_target.h must come first.
#include <hwy/highway.h>

#include "simd/intensity_row-inl.h"

HWY_BEFORE_NAMESPACE();
namespace stillfield {
namespace HWY_NAMESPACE {

// Sixteen sums, whatever the width of vectors.
class ColumnSums {
 public:
  HWY_INLINE ColumnSums() {
    for (VF& v : sum_) v = hn::Zero(Floats32());
  }

  // term(column): the terms of the columns that begin there.
  template <class Term>
  HWY_INLINE void add(int columns, const Term& term) {
    for (int i = 0; i < columns; i += kColumnQuantum) {
      for (int v = 0; v < kVectors; ++v) sum_[v] = hn::Add(sum_[v], term(i + v * kLanes));
    }
  }

  HWY_INLINE double total() const {
    HWY_ALIGN float lane[kColumnQuantum];
    for (int v = 0; v < kVectors; ++v) hn::Store(sum_[v], Floats32(), lane + v * kLanes);
    double all = 0.0;
    for (const float x : lane) all += static_cast<double>(x);
    return all;
  }

 private:
  static constexpr int kLanes = static_cast<int>(hn::MaxLanes(Floats32()));
  static constexpr int kVectors = kColumnQuantum / kLanes;
  VF sum_[kVectors];
};

// f(d) summed over the pairs that each row owns.
template <class F>
HWY_INLINE void sum_pairs(const IntensityBand& band, double* out, const F& f) {
  const Floats32 df;
  int neighbours = 0;
  for (int r = 0; r < band.rings; ++r) neighbours += band.ring_size[static_cast<std::size_t>(r)];
  for (int row = band.first_row; row < band.first_row + band.rows; ++row) {
    const auto parity = static_cast<std::size_t>(row & 1);
    const float* x = band.field + row * band.stride;
    double total = 0.0;
    for (int t = 0; t < neighbours; ++t) {
      const IntensityNeighbour& n = band.neighbour[static_cast<std::size_t>(t)];
      if (!n.forward || row < n.first_row || row >= n.last_row) continue;
      const ColumnRange inside(n.begin[parity], n.end[parity]);
      const float* there = x + n.offset[parity];
      ColumnSums sums;
      sums.add(band.columns, [&](int i) HWY_ATTR {
        return inside.keep(i, f(hn::Sub(hn::Load(df, x + i), hn::LoadU(df, there + i))));
      });
      total += static_cast<double>(n.weight) * sums.total();
    }
    out[row] = total;
  }
}

void squared_differences(const IntensityBand& band, double* out) {
  sum_pairs(band, out, [](VF d) HWY_ATTR { return hn::Mul(d, d); });
}

void absolute_differences(const IntensityBand& band, double* out) {
  sum_pairs(band, out, [](VF d) HWY_ATTR { return hn::Abs(d); });
}

void squared_residuals(const IntensityBand& band, double* out) {
  const Floats32 df;
  for (int row = band.first_row; row < band.first_row + band.rows; ++row) {
    const float* x = band.field + row * band.stride;
    const float* y = band.value + row * band.stride;
    const float* p = band.row[row].precision;
    ColumnSums sums;
    sums.add(band.columns, [&](int i) HWY_ATTR {
      const VF d = hn::Sub(hn::Load(df, y + i), hn::Load(df, x + i));
      return hn::Mul(hn::Load(df, p + i), hn::Mul(d, d));
    });
    out[row] = sums.total();
  }
}

}  // namespace HWY_NAMESPACE
}  // namespace stillfield
HWY_AFTER_NAMESPACE();

#if HWY_ONCE
namespace stillfield {

HWY_EXPORT(squared_differences);
HWY_EXPORT(absolute_differences);
HWY_EXPORT(squared_residuals);

void squared_differences(const IntensityBand& band, double* out) {
  HWY_DYNAMIC_DISPATCH(squared_differences)(band, out);
}

void absolute_differences(const IntensityBand& band, double* out) {
  HWY_DYNAMIC_DISPATCH(absolute_differences)(band, out);
}

void squared_residuals(const IntensityBand& band, double* out) {
  HWY_DYNAMIC_DISPATCH(squared_residuals)(band, out);
}

}  // namespace stillfield
#endif
