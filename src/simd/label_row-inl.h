// Pieces shared by the label kernels, once for each CPU target: walking a band row pair by row
// pair with its random words, the table lookup, and the guards at the ends of a row.

#if defined(STILLFIELD_SIMD_LABEL_ROW_INL_H_) == defined(HWY_TARGET_TOGGLE)
#ifdef STILLFIELD_SIMD_LABEL_ROW_INL_H_
#undef STILLFIELD_SIMD_LABEL_ROW_INL_H_
#else
#define STILLFIELD_SIMD_LABEL_ROW_INL_H_
#endif

#include <hwy/cache_control.h>
#include <hwy/highway.h>

#include <algorithm>
#include <cstring>

#include "simd/label_band.h"
#include "simd/philox-inl.h"

HWY_BEFORE_NAMESPACE();
namespace stillfield {
namespace HWY_NAMESPACE {
namespace hn = hwy::HWY_NAMESPACE;

// Words of a row handled at a time: the random words of two rows then stay in the L1 cache.
constexpr int kChunkWords = 384;

// Several weight planes share the cache: shorter chunks, but still whole blocks of random words.
HWY_INLINE int most_chunk_words(int planes) {
  return std::max(64, kChunkWords / planes / 32 * 32);
}

constexpr float kUniformScale = 16777216.0f;  // uniforms are 24-bit integers over 2^24

// A run of words [first, first + words) of one row, with its random words.
struct RowChunk {
  std::uint8_t* labels;         // word 0 of the row
  const float* weights;         // site 0 of the row, class 0
  std::uint8_t* counts;         // byte 0 of the row, class 1, or null
  const std::uint32_t* random;  // word of site b Q + first + i at random[b * random_stride + i]
  std::ptrdiff_t random_stride;
  int parity;
  int first;
  int words;
};

// Restores what a row update must not change: the site after the last one, and the guard words.
HWY_INLINE void close_row(const LabelBand& band, std::uint8_t* labels, int parity) {
  const int q = band.words;
  const int sites = band.sites[static_cast<std::size_t>(parity)];
  if (sites < 4 * q) labels[4 * (sites % q) + sites / q] = kGuardLabel;
  std::uint32_t front, back;
  std::memcpy(&front, labels, 4);
  std::memcpy(&back, labels + 4 * (q - 1), 4);
  const std::uint32_t before = back << 8 | std::uint32_t{kGuardLabel};
  const std::uint32_t after = front >> 8 | std::uint32_t{kGuardLabel} << 24;
  std::memcpy(labels - 4, &before, 4);
  std::memcpy(labels + 4 * q, &after, 4);
}

// Fetches the weights of the columns whose random words are being drawn.
struct FetchWeights {
  const float* even;  // first column of the draw, class 0
  const float* odd;
  std::ptrdiff_t plane;
  int planes;

  HWY_INLINE void operator()(int j, int n) const {
    constexpr int kFloatsPerLine = 16;
    for (int k = 0; k < planes; ++k) {
      for (int i = j; i < j + n; i += kFloatsPerLine) {
        hwy::Prefetch(even + k * plane + i);
        hwy::Prefetch(odd + k * plane + i);
      }
    }
  }
};

// Calls update(chunk) for every chunk of every row of the band.
template <class Update>
HWY_INLINE void for_each_chunk(const LabelBand& band, const Update& update) {
  HWY_ALIGN std::uint32_t even[4 * kChunkWords];
  HWY_ALIGN std::uint32_t odd[4 * kChunkWords];
  const int q = band.words;
  const int planes = band.classes == 2 ? 1 : band.classes;
  const int chunk_words = most_chunk_words(planes);
  const int most_sites = std::max(band.sites[0], band.sites[1]);
  const int end_row = band.first_row + band.rows;
  for (int row = band.first_row; row < end_row; row += 2) {
    const auto pair = static_cast<std::uint32_t>(row >> 1);
    const float* even_weights = band.weights + row * band.weight_stride;
    const float* odd_weights = even_weights + (row + 1 < end_row ? band.weight_stride : 0);
    const auto draw = [&](int column, int columns, int place) HWY_ATTR {
      draw_row_pair(
          band.random, pair, static_cast<std::uint32_t>(column), columns, even + place, odd + place,
          FetchWeights{even_weights + column, odd_weights + column, band.weight_plane, planes});
    };
    for (int first = 0; first < q; first += chunk_words) {
      const int words = std::min(chunk_words, q - first);
      if (words == q) {  // the whole row: only as many random words as there are sites
        draw(0, most_sites, 0);
      } else {
        for (int b = 0; b < 4; ++b) draw(b * q + first, words, b * words);
      }
      for (int parity = 0; parity < 2 && row + parity < end_row; ++parity) {
        const std::ptrdiff_t r = row + parity;
        update(RowChunk{band.labels + r * band.label_stride, band.weights + r * band.weight_stride,
                        band.counts ? band.counts + r * band.count_stride : nullptr,
                        parity == 0 ? even : odd, words, parity, first, words});
      }
    }
    for (int parity = 0; parity < 2 && row + parity < end_row; ++parity) {
      close_row(band, band.labels + (row + parity) * band.label_stride, parity);
    }
  }
}

#if HWY_TARGET != HWY_SCALAR

using Bytes = hn::ScalableTag<std::uint8_t>;
using Words = hn::ScalableTag<std::uint32_t>;
using Floats = hn::ScalableTag<float>;
using VB = hn::Vec<Bytes>;
using VW = hn::Vec<Words>;
using VF = hn::Vec<Floats>;

// table[n] for n = the low bits of each lane, n <= kMax. Higher bits of a lane are ignored.
template <int kMax>
struct Lookup {
#if HWY_TARGET <= HWY_AVX2
  // One permutation when the table fits a vector: AVX2 looks at 3 bits of a lane, AVX-512 at 4.
  static constexpr std::size_t kLanes = hn::MaxLanes(Floats());
  static constexpr bool kFits = kMax < static_cast<int>(kLanes);
#else
  static constexpr bool kFits = false;
#endif
  explicit HWY_INLINE Lookup(const float* table)
      : table_(table), first_(hn::LoadU(Floats(), table)) {}

  HWY_INLINE VF operator()(VW n) const {
    const Words d;
#if HWY_TARGET <= HWY_AVX2
    if constexpr (kFits) {
#if HWY_IS_DEBUG_BUILD
      n = hn::And(n, hn::Set(d, static_cast<std::uint32_t>(kLanes - 1)));
#endif
      return hn::TableLookupLanes(first_, hn::IndicesFromVec(Floats(), n));
    }
#endif
    n = hn::And(n, hn::Set(d, 15u));
    VF value = hn::Set(Floats(), table_[0]);
    for (int i = 1; i <= kMax; ++i) {
      const auto here = hn::Eq(n, hn::Set(d, static_cast<std::uint32_t>(i)));
      value = hn::IfThenElse(hn::RebindMask(Floats(), here), hn::Set(Floats(), table_[i]), value);
    }
    return value;
  }

 private:
  const float* table_;
  VF first_;
};

// The lanes' 24-bit uniform integers as floats.
HWY_INLINE VF uniform_integers(VW words) {
  const hn::RebindToSigned<Words> di;
  return hn::ConvertTo(Floats(), hn::BitCast(di, hn::ShiftRight<8>(words)));
}

#endif  // HWY_TARGET

}  // namespace HWY_NAMESPACE
}  // namespace stillfield
HWY_AFTER_NAMESPACE();

#endif  // per-target guard
