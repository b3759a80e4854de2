#include "simd/intensity_rows.h"

#undef HWY_TARGET_INCLUDE
#define HWY_TARGET_INCLUDE "simd/intensity_rows.cc"
#include <hwy/foreach_target.h>
// foreach_target.h must come first.
#include <hwy/highway.h>

#include "simd/intensity_row-inl.h"

HWY_BEFORE_NAMESPACE();
namespace stillfield {
namespace HWY_NAMESPACE {

// x = pull S + (hold y + spread z) of a row, kept while rows are alike.
struct RowCoefficients {
  IntensityRow of{};
  int first = -1;
  HWY_ALIGN float pull[kStripColumns];    // lambda / q
  HWY_ALIGN float hold[kStripColumns];    // c p / q
  HWY_ALIGN float spread[kStripColumns];  // 1 / sqrt q

  HWY_INLINE void prepare(const IntensityBand& band, const RowStrip& strip) {
    const IntensityRow& row = band.row[strip.row];
    if (first == strip.first && row.total_weight == of.total_weight &&
        row.precision == of.precision) {
      return;
    }
    of = row;
    first = strip.first;
    const Floats32 df;
    const VF strength = hn::Set(df, band.strength);
    const VF c = hn::Set(df, band.noise_precision);
    for (int i = 0; i < strip.columns; i += static_cast<int>(hn::Lanes(df))) {
      const VF p = hn::Mul(c, hn::Load(df, row.precision + first + i));
      const VF w = hn::Load(df, row.total_weight + first + i);
      const VF r = reciprocal_or_zero(hn::Add(hn::Mul(strength, w), p));
      hn::Store(hn::Mul(strength, r), df, pull + i);
      hn::Store(hn::Mul(p, r), df, hold + i);
      hn::Store(hn::Sqrt(r), df, spread + i);
    }
  }
};

// kNear, kFar: neighbours in the first two rings, known at compile time; kNear = 0: any rings.
template <int kNear, int kFar>
struct RingSum {
  const IntensityBand& band;
  std::array<std::ptrdiff_t, kMaxNeighbours> offset;

  HWY_INLINE RingSum(const IntensityBand& b, int parity) : band(b), offset{} {
    int n = 0;
    for (int r = 0; r < b.rings; ++r) n += b.ring_size[static_cast<std::size_t>(r)];
    for (std::size_t t = 0; t < static_cast<std::size_t>(n); ++t) {
      offset[t] = b.neighbour[t].offset[static_cast<std::size_t>(parity)];
    }
  }

  HWY_INLINE VF ring(const float* x, std::size_t first, int size) const {
    const Floats32 df;
    VF sum = hn::LoadU(df, x + offset[first]);
    for (std::size_t t = 1; t < static_cast<std::size_t>(size); ++t) {
      sum = hn::Add(sum, hn::LoadU(df, x + offset[first + t]));
    }
    return sum;
  }

  HWY_INLINE VF operator()(const float* x) const {
    const Floats32 df;
    VF sum = ring(x, 0, kNear > 0 ? kNear : band.ring_size[0]);
    if constexpr (kFar > 0) {
      sum = hn::Add(sum, hn::Mul(hn::Set(df, band.neighbour[kNear].weight), ring(x, kNear, kFar)));
    }
    if constexpr (kNear == 0) {
      std::size_t first = static_cast<std::size_t>(band.ring_size[0]);
      for (std::size_t r = 1; r < static_cast<std::size_t>(band.rings); ++r) {
        const VF weight = hn::Set(df, band.neighbour[first].weight);
        sum = hn::Add(sum, hn::Mul(weight, ring(x, first, band.ring_size[r])));
        first += static_cast<std::size_t>(band.ring_size[r]);
      }
    }
    return sum;
  }
};

template <bool kMoments, int kNear, int kFar>
void run_smooth(const IntensityBand& band) {
  const Floats32 df;
  const NormalTable normal;
  RowCoefficients coefficients[2];
  const RingSum<kNear, kFar> even(band, 0), odd(band, 1);
  for_each_strip(band, [&](const RowStrip& strip) HWY_ATTR {
    RowCoefficients& c = coefficients[strip.parity];
    c.prepare(band, strip);
    const RingSum<kNear, kFar>& ring_sum = strip.parity == 0 ? even : odd;
    const std::ptrdiff_t row = strip.row * band.stride + strip.first;
    for (int i = 0; i < strip.columns; i += static_cast<int>(hn::Lanes(df))) {
      const VF z = normal(hn::Load(NormalWords(), strip.words + i));
      const VF s = ring_sum(band.field + row + i);
      const VF y = hn::Load(df, band.value + row + i);
      const VF mean =
          hn::Add(hn::Mul(hn::Load(df, c.pull + i), s), hn::Mul(hn::Load(df, c.hold + i), y));
      store_site<kMoments>(band, row + i, hn::Add(mean, hn::Mul(hn::Load(df, c.spread + i), z)));
    }
  });
}

template <bool kMoments>
void run_edges(const IntensityBand& band) {
  const Floats32 df;
  const NormalTable normal;
  int neighbours = 0;
  for (int r = 0; r < band.rings; ++r) neighbours += band.ring_size[static_cast<std::size_t>(r)];
  const VF c = hn::Set(df, band.noise_precision);
  for_each_strip(band, [&](const RowStrip& strip) HWY_ATTR {
    const std::ptrdiff_t row = strip.row * band.stride + strip.first;
    const auto parity = static_cast<std::size_t>(strip.parity);
    const float* precision = band.row[strip.row].precision + strip.first;
    for (int i = 0; i < strip.columns; i += static_cast<int>(hn::Lanes(df))) {
      VF s = hn::Zero(df);
      VF q = hn::Zero(df);
      for (int t = 0; t < neighbours; ++t) {
        const IntensityNeighbour& n = band.neighbour[static_cast<std::size_t>(t)];
        const std::ptrdiff_t there = row + i + n.offset[parity];
        const float* omega = band.pair_precision + n.pair_plane * band.pair_plane;
        const VF w = hn::LoadU(df, omega + (n.forward ? row + i : there));
        s = hn::Add(s, hn::Mul(w, hn::LoadU(df, band.field + there)));
        q = hn::Add(q, w);
      }
      const VF p = hn::Mul(c, hn::LoadU(df, precision + i));
      const VF r = reciprocal_or_zero(hn::Add(q, p));
      const VF mean = hn::Mul(hn::Add(s, hn::Mul(p, hn::Load(df, band.value + row + i))), r);
      const VF z = normal(hn::Load(NormalWords(), strip.words + i));
      store_site<kMoments>(band, row + i, hn::Add(mean, hn::Mul(hn::Sqrt(r), z)));
    }
  });
}

template <bool kMoments>
void run_rings(const IntensityBand& band) {
  const int near = band.ring_size[0];
  const int far = band.rings > 1 ? band.ring_size[1] : 0;
  if (band.rings == 1 && near == 4) return run_smooth<kMoments, 4, 0>(band);
  if (band.rings == 2 && near == 4 && far == 4) return run_smooth<kMoments, 4, 4>(band);
  return run_smooth<kMoments, 0, 0>(band);
}

void smooth_rows(const IntensityBand& band) {
  if (band.sum) return run_rings<true>(band);
  run_rings<false>(band);
}

void edges_rows(const IntensityBand& band) {
  if (band.sum) return run_edges<true>(band);
  run_edges<false>(band);
}

}  // namespace HWY_NAMESPACE
}  // namespace stillfield
HWY_AFTER_NAMESPACE();

#if HWY_ONCE
namespace stillfield {

HWY_EXPORT(smooth_rows);
HWY_EXPORT(edges_rows);

void smooth_rows(const IntensityBand& band) {
  HWY_DYNAMIC_DISPATCH(smooth_rows)(band);
}

void edges_rows(const IntensityBand& band) {
  HWY_DYNAMIC_DISPATCH(edges_rows)(band);
}

}  // namespace stillfield
#endif
