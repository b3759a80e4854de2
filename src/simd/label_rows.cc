// Gibbs updates of fields of K labels. Formula and layout: simd/label_band.h.
#include "simd/label_band.h"

#undef HWY_TARGET_INCLUDE
#define HWY_TARGET_INCLUDE "simd/label_rows.cc"
#include <hwy/foreach_target.h>
// foreach_target.h must come first.
#include <hwy/highway.h>

#include "simd/label_row-inl.h"

HWY_BEFORE_NAMESPACE();
namespace stillfield {
namespace HWY_NAMESPACE {

constexpr float kUniformStep = 1.0f / kUniformScale;

#if HWY_TARGET == HWY_SCALAR

// kClasses, kNear, kFar only matter to the vector kernels.
template <int kClasses, int kNear, int kFar>
HWY_INLINE void update_chunk(const LabelBand& band, const RowChunk& c) {
  float running[kMaxLabels];
  for (int i = c.first; i < c.first + c.words; ++i) {
    for (int b = 0; b < 4; ++b) {
      float sum = 0.0f;
      for (int k = 0; k < band.classes; ++k) {
        float w = c.weights[k * band.weight_plane + b * band.words + i];
        for (int r = 0; r < band.ring_count; ++r) {
          const Ring& ring = band.rings[static_cast<std::size_t>(r)];
          std::size_t equal = 0;
          for (int t = 0; t < ring.neighbours; ++t) {
            equal += c.labels[4 * i + b + ring.offset[c.parity][t]] == k;
          }
          w *= ring.table[equal];
        }
        sum = k == 0 ? w : sum + w;
        running[k] = sum;
      }
      const std::uint32_t word = c.random[b * c.random_stride + i - c.first];
      const float target = static_cast<float>(word >> 8) * kUniformStep * sum;
      int label = 0;
      for (int k = 0; k + 1 < band.classes; ++k) label += running[k] <= target;
      c.labels[4 * i + b] = static_cast<std::uint8_t>(label);
      if (c.counts && label > 0) ++c.counts[(label - 1) * band.count_plane + 4 * i + b];
    }
  }
}

#else

// The vectors of a ring's labels around a run of words, loaded once for all classes.
template <int kNeighbours>
struct RingLabels {
  VB label[kNeighbours];
  HWY_INLINE RingLabels(const Ring& ring, const RowChunk& c, int i) {
    for (int t = 0; t < kNeighbours; ++t) {
      label[t] = hn::LoadU(Bytes(), c.labels + 4 * i + ring.offset[c.parity][t]);
    }
  }
  // Neighbours with label k, in every byte.
  HWY_INLINE VW equal(int k) const {
    const Bytes d8;
    const VB wanted = hn::Set(d8, static_cast<std::uint8_t>(k));
    VB n = hn::Zero(d8);
    for (int t = 0; t < kNeighbours; ++t) {
      n = hn::Sub(n, hn::VecFromMask(d8, hn::Eq(label[t], wanted)));
    }
    return hn::BitCast(Words(), n);
  }
};

HWY_INLINE VW count_equal(const Ring& ring, const RowChunk& c, int i, int k) {
  const Bytes d8;
  const VB wanted = hn::Set(d8, static_cast<std::uint8_t>(k));
  VB n = hn::Zero(d8);
  for (int t = 0; t < ring.neighbours; ++t) {
    const VB label = hn::LoadU(d8, c.labels + 4 * i + ring.offset[c.parity][t]);
    n = hn::Sub(n, hn::VecFromMask(d8, hn::Eq(label, wanted)));
  }
  return hn::BitCast(Words(), n);
}

template <int kByte>
HWY_INLINE VF target_sum(const RowChunk& c, int i, VF sum) {
  const VW words = hn::Load(Words(), c.random + kByte * c.random_stride + i - c.first);
  return hn::Mul(hn::Mul(uniform_integers(words), hn::Set(Floats(), kUniformStep)), sum);
}

HWY_INLINE void store_labels(const LabelBand& band, const RowChunk& c, int i, VW z) {
  const Bytes d8;
  const VB labels = hn::BitCast(d8, z);
  hn::Store(labels, d8, c.labels + 4 * i);
  if (!c.counts) return;
  for (int k = 1; k < band.classes; ++k) {
    std::uint8_t* count = c.counts + (k - 1) * band.count_plane + 4 * i;
    const auto here = hn::Eq(labels, hn::Set(d8, static_cast<std::uint8_t>(k)));
    hn::Store(hn::Sub(hn::Load(d8, count), hn::VecFromMask(d8, here)), d8, count);
  }
}

// Classes and rings known at compile time: everything stays in registers.
template <int kClasses, int kNear, int kFar, int kByte>
HWY_INLINE VW update_byte(const LabelBand& band, const RowChunk& c, int i, const VW* near_equal,
                          const VW* far_equal, const Lookup<4>& near, const Lookup<4>& far) {
  const Words d32;
  const Floats df;
  constexpr int kShift = 8 * kByte;
  VF running[kClasses];
  for (int k = 0; k < kClasses; ++k) {
    VF w = hn::Load(df, c.weights + k * band.weight_plane + kByte * band.words + i);
    w = hn::Mul(w, near(hn::ShiftRight<kShift>(near_equal[k])));
    if constexpr (kFar > 0) w = hn::Mul(w, far(hn::ShiftRight<kShift>(far_equal[k])));
    running[k] = k == 0 ? w : hn::Add(running[k > 0 ? k - 1 : 0], w);
  }
  const VF target = target_sum<kByte>(c, i, running[kClasses - 1]);
  VW label = hn::Zero(d32);
  for (int k = 0; k + 1 < kClasses; ++k) {
    const auto passed = hn::RebindMask(d32, hn::Le(running[k], target));
    label = hn::Sub(label, hn::VecFromMask(d32, passed));
  }
  return hn::ShiftLeft<kShift>(label);
}

template <int kClasses, int kNear, int kFar>
HWY_INLINE void update_chunk(const LabelBand& band, const RowChunk& c) {
  const int lanes = static_cast<int>(hn::Lanes(Words()));
  const Lookup<4> near(band.rings[0].table.data());
  const Lookup<4> far(band.rings[1].table.data());
  for (int i = c.first; i < c.first + c.words; i += lanes) {
    VW near_equal[kClasses], far_equal[kClasses];
    const RingLabels<kNear> near_labels(band.rings[0], c, i);
    for (int k = 0; k < kClasses; ++k) near_equal[k] = near_labels.equal(k);
    if constexpr (kFar > 0) {
      const RingLabels<kFar> far_labels(band.rings[1], c, i);
      for (int k = 0; k < kClasses; ++k) far_equal[k] = far_labels.equal(k);
    }
    const auto byte = [&](auto b) HWY_ATTR {
      return update_byte<kClasses, kNear, kFar, decltype(b)::value>(band, c, i, near_equal,
                                                                    far_equal, near, far);
    };
    VW z = byte(std::integral_constant<int, 0>());
    z = hn::Or(z, byte(std::integral_constant<int, 1>()));
    z = hn::Or(z, byte(std::integral_constant<int, 2>()));
    z = hn::Or(z, byte(std::integral_constant<int, 3>()));
    store_labels(band, c, i, z);
  }
}

// Any number of classes and any rings: running sums go through a small buffer.
template <int kByte>
HWY_INLINE VW update_byte_any(const LabelBand& band, const RowChunk& c, int i) {
  const Words d32;
  const Floats df;
  const std::size_t lanes = hn::Lanes(df);
  HWY_ALIGN float running[kMaxLabels * hn::MaxLanes(Floats())];
  VF sum = hn::Zero(df);
  for (int k = 0; k < band.classes; ++k) {
    VF w = hn::Load(df, c.weights + k * band.weight_plane + kByte * band.words + i);
    for (int r = 0; r < band.ring_count; ++r) {
      const Ring& ring = band.rings[static_cast<std::size_t>(r)];
      const VW n = hn::ShiftRight<8 * kByte>(count_equal(ring, c, i, k));
      w = hn::Mul(w, Lookup<kMaxRingNeighbours>(ring.table.data())(n));
    }
    sum = k == 0 ? w : hn::Add(sum, w);
    hn::Store(sum, df, running + static_cast<std::size_t>(k) * lanes);
  }
  const VF target = target_sum<kByte>(c, i, sum);
  VW label = hn::Zero(d32);
  for (int k = 0; k + 1 < band.classes; ++k) {
    const VF r = hn::Load(df, running + static_cast<std::size_t>(k) * lanes);
    label = hn::Sub(label, hn::VecFromMask(d32, hn::RebindMask(d32, hn::Le(r, target))));
  }
  return hn::ShiftLeft<8 * kByte>(label);
}

template <>
HWY_INLINE void update_chunk<0, 0, 0>(const LabelBand& band, const RowChunk& c) {
  const int lanes = static_cast<int>(hn::Lanes(Words()));
  for (int i = c.first; i < c.first + c.words; i += lanes) {
    VW z = update_byte_any<0>(band, c, i);
    z = hn::Or(z, update_byte_any<1>(band, c, i));
    z = hn::Or(z, update_byte_any<2>(band, c, i));
    z = hn::Or(z, update_byte_any<3>(band, c, i));
    store_labels(band, c, i, z);
  }
}

#endif  // HWY_TARGET

template <int kClasses, int kNear, int kFar>
void run(const LabelBand& band) {
  for_each_chunk(
      band, [&band](const RowChunk& c) HWY_ATTR { update_chunk<kClasses, kNear, kFar>(band, c); });
}

template <int kNear, int kFar>
void run_classes(const LabelBand& band) {
  switch (band.classes) {
    case 3:
      return run<3, kNear, kFar>(band);
    case 4:
      return run<4, kNear, kFar>(band);
    case 5:
      return run<5, kNear, kFar>(band);
    case 6:
      return run<6, kNear, kFar>(band);
    case 7:
      return run<7, kNear, kFar>(band);
    case 8:
      return run<8, kNear, kFar>(band);
    default:
      return run<0, 0, 0>(band);
  }
}

void label_rows(const LabelBand& band) {
  const int near = band.rings[0].neighbours;
  const int far = band.ring_count > 1 ? band.rings[1].neighbours : 0;
  if (band.ring_count == 1 && near == 4) return run_classes<4, 0>(band);
  if (band.ring_count == 2 && near == 4 && far == 4) return run_classes<4, 4>(band);
  return run<0, 0, 0>(band);
}

}  // namespace HWY_NAMESPACE
}  // namespace stillfield
HWY_AFTER_NAMESPACE();

#if HWY_ONCE
namespace stillfield {

HWY_EXPORT(label_rows);

void label_rows(const LabelBand& band) {
  HWY_DYNAMIC_DISPATCH(label_rows)(band);
}

}  // namespace stillfield
#endif
