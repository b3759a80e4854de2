// Pieces shared by the kernels of intensity fields, once for each CPU target: walking a band in
// strips of columns with the random words of each row pair, and storing a site with its moments.

#if defined(STILLFIELD_SIMD_INTENSITY_ROW_INL_H_) == defined(HWY_TARGET_TOGGLE)
#ifdef STILLFIELD_SIMD_INTENSITY_ROW_INL_H_
#undef STILLFIELD_SIMD_INTENSITY_ROW_INL_H_
#else
#define STILLFIELD_SIMD_INTENSITY_ROW_INL_H_
#endif

#include <hwy/highway.h>

#include <algorithm>

#include "simd/intensity_band.h"
#include "simd/normal-inl.h"
#include "simd/philox-inl.h"

HWY_BEFORE_NAMESPACE();
namespace stillfield {
namespace HWY_NAMESPACE {
namespace hn = hwy::HWY_NAMESPACE;

using VF = hn::Vec<Floats32>;

// Columns handled at a time: random words and row coefficients then stay in the L1 cache.
constexpr int kStripColumns = 512;

// One row of one strip.
struct RowStrip {
  int row;
  int parity;
  int first;  // column
  int columns;
  const std::uint32_t* words;  // of column `first`
};

// Calls update(strip) for every row of every strip of the band.
template <class Update>
HWY_INLINE void for_each_strip(const IntensityBand& band, const Update& update) {
  HWY_ALIGN std::uint32_t even[kStripColumns];
  HWY_ALIGN std::uint32_t odd[kStripColumns];
  const int end_row = band.first_row + band.rows;
  for (int first = 0; first < band.columns; first += kStripColumns) {
    const int columns = std::min(kStripColumns, band.columns - first);
    for (int row = band.first_row; row < end_row; row += 2) {
      draw_row_pair(band.random, static_cast<std::uint32_t>(row >> 1),
                    static_cast<std::uint32_t>(first), columns, even, odd);
      update(RowStrip{row, 0, first, columns, even});
      if (row + 1 < end_row) update(RowStrip{row + 1, 1, first, columns, odd});
    }
  }
}

template <bool kMoments>
HWY_INLINE void store_site(const IntensityBand& band, std::ptrdiff_t at, VF x) {
  const Floats32 df;
  hn::Store(x, df, band.field + at);
  if constexpr (kMoments) {
    const VF d = hn::Sub(x, hn::Load(df, band.shift + at));
    hn::Store(hn::Add(hn::Load(df, band.sum + at), d), df, band.sum + at);
    hn::Store(hn::Add(hn::Load(df, band.square + at), hn::Mul(d, d)), df, band.square + at);
  }
}

// The columns [begin, end) of a vector that starts at any column. Iota is slow, hence once a row.
class ColumnRange {
 public:
  HWY_INLINE ColumnRange(int begin, int end)
      : lane_(hn::Iota(Ints(), 0)),
        before_(hn::Set(Ints(), begin - 1)),
        end_(hn::Set(Ints(), end)) {}

  HWY_INLINE VF keep(int column, VF v) const {
    const auto here = hn::Add(lane_, hn::Set(Ints(), column));
    const auto inside = hn::And(hn::Gt(here, before_), hn::Lt(here, end_));
    return hn::IfThenElseZero(hn::RebindMask(Floats32(), inside), v);
  }

 private:
  using Ints = hn::RebindToSigned<Floats32>;
  hn::Vec<Ints> lane_, before_, end_;
};

HWY_INLINE VF reciprocal_or_zero(VF q) {
  const Floats32 df;
  return hn::IfThenElseZero(hn::Gt(q, hn::Zero(df)), hn::Div(hn::Set(df, 1.0f), q));
}

}  // namespace HWY_NAMESPACE
}  // namespace stillfield
HWY_AFTER_NAMESPACE();

#endif  // per-target guard
