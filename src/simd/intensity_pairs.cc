#include "simd/intensity_pairs.h"

#undef HWY_TARGET_INCLUDE
#define HWY_TARGET_INCLUDE "simd/intensity_pairs.cc"
#include <hwy/foreach_target.h>
// foreach_target.h must come first.
#include <hwy/highway.h>

#include "simd/intensity_row-inl.h"

HWY_BEFORE_NAMESPACE();
namespace stillfield {
namespace HWY_NAMESPACE {

HWY_INLINE VF inverse_gaussian(VF e, VF z, VF u) {
  const Floats32 df;
  const VF one = hn::Set(df, 1.0f);
  const VF floor = hn::Set(df, kPairFloor);
  const VF chi = hn::Mul(z, z);
  const VF e2 = hn::Add(e, e);
  const VF root = hn::Sqrt(hn::Mul(chi, hn::Add(chi, hn::Add(e2, e2))));
  const VF bottom = hn::Add(hn::Add(hn::Add(e2, chi), root), floor);
  const VF small = hn::Div(hn::Set(df, 2.0f), bottom);
  const VF eg = hn::Mul(e, small);
  const VF large = hn::Div(one, hn::Add(hn::Mul(e, eg), floor));
  return hn::IfThenElse(hn::Le(hn::Mul(u, hn::Add(one, eg)), one), small, large);
}

// (n + 1/2) / 2^24 of the lanes' upper 24 bits n.
HWY_INLINE VF uniforms(VWord words) {
  const Floats32 df;
  const hn::RebindToSigned<Floats32> di;
  const VF n = hn::ConvertTo(df, hn::BitCast(di, hn::ShiftRight<8>(words)));
  return hn::Mul(hn::Add(n, hn::Set(df, 0.5f)), hn::Set(df, 1.0f / 16777216.0f));
}

void draw_plane(const IntensityBand& band, const IntensityNeighbour& n) {
  const Floats32 df;
  const NormalWords d32;
  const NormalTable normal;
  HWY_ALIGN std::uint32_t uniform_words[2][kStripColumns];
  const float rate = band.strength * n.weight;
  const VF k = hn::Set(df, rate);
  const VF k2 = hn::Set(df, rate * rate);
  IntensityBand of_z = band;
  of_z.random.word3 += static_cast<std::uint32_t>(2 * n.pair_plane) * kSliceStep;
  RandomPlane of_u = of_z.random;
  of_u.word3 += kSliceStep;
  float* omega = band.pair_precision + n.pair_plane * band.pair_plane;
  for_each_strip(of_z, [&](const RowStrip& strip) HWY_ATTR {
    const auto parity = static_cast<std::size_t>(strip.parity);
    if (parity == 0) {
      draw_row_pair(of_u, static_cast<std::uint32_t>(strip.row >> 1),
                    static_cast<std::uint32_t>(strip.first), strip.columns, uniform_words[0],
                    uniform_words[1]);
    }
    const bool row_inside = strip.row >= n.first_row && strip.row < n.last_row;
    const ColumnRange inside(n.begin[parity], row_inside ? n.end[parity] : 0);
    const std::ptrdiff_t row = strip.row * band.stride + strip.first;
    for (int i = 0; i < strip.columns; i += static_cast<int>(hn::Lanes(df))) {
      const float* x = band.field + row + i;
      const VF d = hn::Abs(hn::Sub(hn::Load(df, x), hn::LoadU(df, x + n.offset[parity])));
      const VF z = normal(hn::Load(d32, strip.words + i));
      const VF u = uniforms(hn::Load(d32, uniform_words[parity] + i));
      const VF g = inverse_gaussian(hn::Mul(k, d), z, u);
      hn::Store(inside.keep(strip.first + i, hn::Mul(k2, g)), df, omega + row + i);
    }
  });
}

void draw_pair_precisions(const IntensityBand& band) {
  int neighbours = 0;
  for (int r = 0; r < band.rings; ++r) neighbours += band.ring_size[static_cast<std::size_t>(r)];
  for (int t = 0; t < neighbours; ++t) {
    const IntensityNeighbour& n = band.neighbour[static_cast<std::size_t>(t)];
    if (n.forward) draw_plane(band, n);
  }
}

}  // namespace HWY_NAMESPACE
}  // namespace stillfield
HWY_AFTER_NAMESPACE();

#if HWY_ONCE
namespace stillfield {

HWY_EXPORT(draw_pair_precisions);

void draw_pair_precisions(const IntensityBand& band) {
  HWY_DYNAMIC_DISPATCH(draw_pair_precisions)(band);
}

}  // namespace stillfield
#endif
