// Standard normal numbers of a vector of random words. Included once for each CPU target.
//
// The same operations as standard_normal (random/normal.h), lane by lane, hence the same bits. A
// register holds a coefficient's values of as many binades as it has lanes, the largest tail
// probabilities first; the lanes beyond (1 in 256 with 8 lanes, 1 in 65536 with 16) are done
// again with the next binades. Targets whose permutations are narrower do one word at a time.

#if defined(STILLFIELD_SIMD_NORMAL_INL_H_) == defined(HWY_TARGET_TOGGLE)
#ifdef STILLFIELD_SIMD_NORMAL_INL_H_
#undef STILLFIELD_SIMD_NORMAL_INL_H_
#else
#define STILLFIELD_SIMD_NORMAL_INL_H_
#endif

#include <hwy/highway.h>

#include "random/normal.h"

HWY_BEFORE_NAMESPACE();
namespace stillfield {
namespace HWY_NAMESPACE {
namespace hn = hwy::HWY_NAMESPACE;

using NormalWords = hn::ScalableTag<std::uint32_t>;
using Floats32 = hn::ScalableTag<float>;
using VWord = hn::Vec<NormalWords>;
using VNormal = hn::Vec<Floats32>;

#if HWY_TARGET <= HWY_AVX2

class NormalTable {
 public:
  HWY_INLINE NormalTable() {
    for (int b = 0; b < kBlocks; ++b) {
      for (int k = 0; k <= kNormalDegree; ++k) {
        for (int i = 0; i < kLanes; ++i) {
          const int binade = kNormalBinades - kLanes * (b + 1) + i;
          // Where the exponent's low bits will look for it.
          const int place = (binade + static_cast<int>(kNormalFirstExponent)) & (kLanes - 1);
          block_[b][k][place] = kNormalTable[k][binade];
        }
      }
    }
  }

  HWY_INLINE VNormal operator()(VWord words) const {
    const NormalWords d32;
    const Floats32 df;
    const hn::RebindToSigned<NormalWords> di;
    const auto sign = hn::ShiftRight<31>(hn::BitCast(di, words));
    const auto m = hn::Xor(hn::BitCast(di, words), sign);
    const VNormal tail =
        hn::Min(hn::Add(hn::ConvertTo(df, m), hn::Set(df, 0.5f)), hn::Set(df, kNormalLargestTail));
    const VWord bits = hn::BitCast(d32, tail);
    const VWord mantissa = hn::Or(hn::And(bits, hn::Set(d32, 0x007fffffu)),  //
                                  hn::Set(d32, 0x3f800000u));
    const VNormal t = hn::Sub(hn::BitCast(df, mantissa), hn::Set(df, 1.5f));
    VWord place = hn::ShiftRight<23>(bits);
#if HWY_IS_DEBUG_BUILD
    place = hn::And(place, hn::Set(d32, static_cast<std::uint32_t>(kLanes - 1)));
#endif
    VNormal z = polynomial(0, place, t);
    float limit = kBlockLimit;
    auto beyond = hn::Lt(tail, hn::Set(df, limit));
    for (int b = 1; b < kBlocks && HWY_UNLIKELY(!hn::AllFalse(df, beyond)); ++b) {
      z = hn::IfThenElse(beyond, polynomial(b, place, t), z);
      limit *= kBlockRatio;
      beyond = hn::Lt(tail, hn::Set(df, limit));
    }
    return hn::Xor(z, hn::BitCast(df, hn::And(words, hn::Set(d32, 0x80000000u))));
  }

 private:
  static constexpr int kLanes = static_cast<int>(hn::MaxLanes(Floats32()));
  static constexpr int kBlocks = kNormalBinades / kLanes;
  static constexpr float kBlockRatio = 1.0f / static_cast<float>(1u << kLanes);
  static constexpr float kBlockLimit = 2147483648.0f * kBlockRatio;  // smallest m + 1/2 of block 0

  HWY_INLINE VNormal polynomial(int b, VWord place, VNormal t) const {
    const Floats32 df;
    const auto indices = hn::IndicesFromVec(df, place);
    VNormal z = hn::TableLookupLanes(hn::Load(df, block_[b][kNormalDegree]), indices);
    for (int k = kNormalDegree - 1; k >= 0; --k) {
      z = hn::Add(hn::Mul(z, t), hn::TableLookupLanes(hn::Load(df, block_[b][k]), indices));
    }
    return z;
  }

  HWY_ALIGN float block_[kBlocks][kNormalDegree + 1][kLanes];
};

#else

class NormalTable {
 public:
  HWY_INLINE VNormal operator()(VWord words) const {
    HWY_ALIGN std::uint32_t word[hn::MaxLanes(NormalWords())];
    HWY_ALIGN float z[hn::MaxLanes(NormalWords())];
    hn::Store(words, NormalWords(), word);
    for (std::size_t i = 0; i < hn::Lanes(NormalWords()); ++i) z[i] = standard_normal(word[i]);
    return hn::Load(Floats32(), z);
  }
};

#endif  // HWY_TARGET

}  // namespace HWY_NAMESPACE
}  // namespace stillfield
HWY_AFTER_NAMESPACE();

#endif  // per-target guard
