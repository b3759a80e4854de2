#include "simd/label_statistics.h"

#include <algorithm>

#undef HWY_TARGET_INCLUDE
#define HWY_TARGET_INCLUDE "simd/label_statistics.cc"
#include <hwy/foreach_target.h>
// foreach_target.h must come first.
#include <hwy/highway.h>

HWY_BEFORE_NAMESPACE();
namespace stillfield {
namespace HWY_NAMESPACE {
namespace hn = hwy::HWY_NAMESPACE;

#if HWY_TARGET == HWY_SCALAR

struct StatisticsRow {
  const std::uint8_t* labels;
  const std::uint16_t* levels;
  int parity;
};

HWY_INLINE void sum_site(const LabelBand& band, const StatisticsRow& row, std::uint16_t missing,
                         int site, LabelSums& sums) {
  const std::uint8_t* at = row.labels + 4 * (site % band.words) + site / band.words;
  const std::uint8_t k = *at;
  ++sums.sites[k];
  const std::uint64_t level = row.levels[site];
  if (level != missing) {
    ++sums.observed[k];
    sums.level_sum[k] += level;
    sums.level_square_sum[k] += level * level;
  }
  for (int r = 0; r < band.ring_count; ++r) {
    const Ring& ring = band.rings[static_cast<std::size_t>(r)];
    for (int t = 0; t < ring.neighbours; ++t) {
      sums.equal_ends[static_cast<std::size_t>(r)] += at[ring.offset[row.parity][t]] == k;
    }
  }
}

void sum_rows(const LabelBand& band, const std::uint16_t* levels, std::uint16_t missing,
              LabelSums& sums) {
  for (int r = band.first_row; r < band.first_row + band.rows; ++r) {
    const int parity = r & 1;
    const StatisticsRow row{band.labels + r * band.label_stride, levels + r * band.weight_stride,
                            parity};
    for (int s = 0; s < band.sites[static_cast<std::size_t>(parity)]; ++s) {
      sum_site(band, row, missing, s, sums);
    }
  }
}

#else

// Rows are summed in blocks of words that stay in the L1 cache. At most 256-bit vectors: a row is
// a multiple of 16 words.
constexpr int kBlockWords = 256;
constexpr std::uint8_t kOutside = 0xFF;  // stands for the label of a site outside the image

using Bytes = hn::CappedTag<std::uint8_t, 32>;
using Shorts = hn::CappedTag<std::uint16_t, 16>;
using SignedShorts = hn::CappedTag<std::int16_t, 16>;
using Words = hn::CappedTag<std::uint32_t, 8>;
using SignedWords = hn::CappedTag<std::int32_t, 8>;
using Longs = hn::CappedTag<std::uint64_t, 4>;

struct Block {
  HWY_ALIGN std::uint8_t label[4 * kBlockWords];   // order of label rows
  HWY_ALIGN std::uint16_t seen[4 * kBlockWords];   // image order within each quarter;
                                                   // no class where the level is missing
  HWY_ALIGN std::uint16_t level[4 * kBlockWords];  // minus 2^15: fits signed multiplication
};

// Running sums of one class, one a lane, in the narrowest type that lasts for kMostSteps.
struct ClassLanes {
  HWY_ALIGN std::uint16_t observed[16];
  HWY_ALIGN std::int32_t level[8];
  HWY_ALIGN std::uint32_t square_low[8];
  HWY_ALIGN std::uint32_t square_high[8];
  HWY_ALIGN std::uint64_t sites[4];
};
constexpr int kMostSteps = 30000;  // below 2^31 / 2^16, the bound of `level`

HWY_INLINE void copy_labels(const LabelBand& band, const std::uint8_t* labels, int parity,
                            int first, int words, Block& block) {
  const Words d32;
  const Bytes d8;
  const int lanes = static_cast<int>(hn::Lanes(d32));
  const int q = band.words;
  const int sites = band.sites[static_cast<std::size_t>(parity)];
  for (int i = 0; i < words; i += lanes) {
    auto label = hn::BitCast(d32, hn::LoadU(d8, labels + 4 * (first + i)));
    if (first + i + lanes > sites - 3 * q) {  // some quarter ends here
      const auto site = hn::Iota(d32, static_cast<std::uint32_t>(first + i));
      for (int b = 0; b < 4; ++b) {
        const auto end = hn::Set(d32, static_cast<std::uint32_t>(std::clamp(sites - b * q, 0, q)));
        const auto outside = hn::VecFromMask(d32, hn::Not(hn::Lt(site, end)));
        label = hn::Or(label, hn::And(outside, hn::Set(d32, std::uint32_t{kOutside} << (8 * b))));
      }
    }
    hn::Store(hn::BitCast(d8, label), d8, block.label + 4 * i);
  }
}

template <int kByte>
HWY_INLINE void copy_quarter(const std::uint16_t* levels, std::uint16_t missing, int words,
                             Block& block) {
  const Words d32;
  const Shorts d16;
  const int lanes = static_cast<int>(hn::Lanes(d16));
  const auto none = hn::Set(d16, missing);
  const auto low_byte = hn::Set(d32, 0xFFu);
  const auto bias = hn::Set(d16, std::uint16_t{0x8000});
  const auto* packed = reinterpret_cast<const std::uint32_t*>(block.label);
  for (int i = 0; i < words; i += lanes) {
    const auto low = hn::And(hn::ShiftRight<8 * kByte>(hn::Load(d32, packed + i)), low_byte);
    const auto high =
        hn::And(hn::ShiftRight<8 * kByte>(hn::Load(d32, packed + i + lanes / 2)), low_byte);
    const auto label = hn::ConcatEven(d16, hn::BitCast(d16, high), hn::BitCast(d16, low));
    const auto level = hn::LoadU(d16, levels + i);
    const auto unseen = hn::VecFromMask(d16, hn::Eq(level, none));
    hn::Store(hn::Or(label, unseen), d16, block.seen + kByte * words + i);
    hn::Store(hn::Xor(level, bias), d16, block.level + kByte * words + i);
  }
}

HWY_INLINE void sum_class(const Block& block, int words, int k, ClassLanes& lanes) {
  const Shorts d16;
  const SignedShorts di16;
  const SignedWords di32;
  const Words d32;
  const Bytes d8;
  const Longs d64;
  const auto one = hn::Set(di16, std::int16_t{1});
  const auto low_half = hn::Set(d32, 0xFFFFu);
  const auto label = hn::Set(d16, static_cast<std::uint16_t>(k));
  auto observed = hn::Load(d16, lanes.observed);
  auto level = hn::Load(di32, lanes.level);
  auto square_low = hn::Load(d32, lanes.square_low);
  auto square_high = hn::Load(d32, lanes.square_high);
  const auto pair_products = [di32](auto a, auto b) HWY_ATTR {
    auto upper = hn::Zero(di32);
    const auto lower = hn::ReorderWidenMulAccumulate(di32, a, b, hn::Zero(di32), upper);
    return hn::Add(lower, upper);
  };
  for (int i = 0; i < 4 * words; i += static_cast<int>(hn::Lanes(d16))) {
    const auto here = hn::VecFromMask(d16, hn::Eq(hn::Load(d16, block.seen + i), label));
    const auto kept = hn::BitCast(di16, hn::And(hn::Load(d16, block.level + i), here));
    observed = hn::Sub(observed, here);
    level = hn::Add(level, pair_products(kept, one));
    const auto square = hn::BitCast(d32, pair_products(kept, kept));  // <= 2^31
    square_low = hn::Add(square_low, hn::And(square, low_half));
    square_high = hn::Add(square_high, hn::ShiftRight<16>(square));
  }
  hn::Store(observed, d16, lanes.observed);
  hn::Store(level, di32, lanes.level);
  hn::Store(square_low, d32, lanes.square_low);
  hn::Store(square_high, d32, lanes.square_high);

  const auto byte_label = hn::Set(d8, static_cast<std::uint8_t>(k));
  auto sites = hn::Zero(d8);  // a block has fewer than 256 vectors
  for (int i = 0; i < 4 * words; i += static_cast<int>(hn::Lanes(d8))) {
    const auto here = hn::Eq(hn::Load(d8, block.label + i), byte_label);
    sites = hn::Sub(sites, hn::VecFromMask(d8, here));
  }
  hn::Store(hn::Add(hn::Load(d64, lanes.sites), hn::SumsOf8(sites)), d64, lanes.sites);
}

HWY_INLINE std::uint64_t equal_ends(const Block& block, int words, const Ring& ring,
                                    const std::uint8_t* labels, int parity) {
  const Bytes d8;
  const Longs d64;
  auto sum = hn::Zero(d64);
  for (int i = 0; i < 4 * words; i += static_cast<int>(hn::Lanes(d8))) {
    const auto label = hn::Load(d8, block.label + i);
    auto n = hn::Zero(d8);
    for (int t = 0; t < ring.neighbours; ++t) {
      const auto other =
          hn::LoadU(d8, labels + i + ring.offset[static_cast<std::size_t>(parity)][t]);
      n = hn::Sub(n, hn::VecFromMask(d8, hn::Eq(label, other)));
    }
    sum = hn::Add(sum, hn::SumsOf8(n));
  }
  HWY_ALIGN std::uint64_t lane[4] = {};
  hn::Store(sum, d64, lane);
  return lane[0] + lane[1] + lane[2] + lane[3];
}

void flush_class(ClassLanes& lanes, std::size_t k, LabelSums& sums) {
  std::uint64_t sites = 0, observed = 0, level = 0, square = 0;
  for (const std::uint64_t n : lanes.sites) sites += n;
  for (const std::uint16_t n : lanes.observed) observed += n;
  for (const std::int32_t n : lanes.level) level += static_cast<std::uint64_t>(std::int64_t{n});
  for (const std::uint32_t n : lanes.square_low) square += n;
  for (const std::uint32_t n : lanes.square_high) square += std::uint64_t{n} << 16;
  // Undo the bias c = 2^15: sum of (l + c) and of (l + c)^2, modulo 2^64.
  sums.sites[k] += sites;
  sums.observed[k] += observed;
  sums.level_sum[k] += level + (observed << 15);
  sums.level_square_sum[k] += square + (level << 16) + (observed << 30);
  lanes = ClassLanes{};
}

void sum_rows(const LabelBand& band, const std::uint16_t* levels, std::uint16_t missing,
              LabelSums& sums) {
  Block block;
  ClassLanes lanes[kMaxLabels];
  const auto classes = static_cast<std::size_t>(band.classes);
  std::fill_n(lanes, classes, ClassLanes{});
  const auto flush = [&] {
    for (std::size_t k = 0; k < classes; ++k) flush_class(lanes[k], k, sums);
  };
  const int lanes16 = static_cast<int>(hn::Lanes(Shorts()));
  int steps = 0;
  for (int r = band.first_row; r < band.first_row + band.rows; ++r) {
    const int parity = r & 1;
    const std::uint8_t* labels = band.labels + r * band.label_stride;
    const std::uint16_t* row_levels = levels + r * band.weight_stride;
    for (int first = 0; first < band.words; first += kBlockWords) {
      const int words = std::min(kBlockWords, band.words - first);
      if (steps + 4 * words / lanes16 > kMostSteps) {
        flush();
        steps = 0;
      }
      steps += 4 * words / lanes16;
      copy_labels(band, labels, parity, first, words, block);
      copy_quarter<0>(row_levels + first, missing, words, block);
      copy_quarter<1>(row_levels + band.words + first, missing, words, block);
      copy_quarter<2>(row_levels + 2 * band.words + first, missing, words, block);
      copy_quarter<3>(row_levels + 3 * band.words + first, missing, words, block);
      for (std::size_t k = 0; k < classes; ++k) {
        sum_class(block, words, static_cast<int>(k), lanes[k]);
      }
      for (std::size_t t = 0; t < static_cast<std::size_t>(band.ring_count); ++t) {
        sums.equal_ends[t] += equal_ends(block, words, band.rings[t], labels + 4 * first, parity);
      }
    }
  }
  flush();
}

#endif  // HWY_TARGET

void empty_visits(std::size_t n, std::uint8_t* visits, std::uint16_t* count) {
#if HWY_TARGET == HWY_SCALAR
  for (std::size_t i = 0; i < n; ++i) {
    count[i] = static_cast<std::uint16_t>(count[i] + visits[i]);
    visits[i] = 0;
  }
#else
  const hn::ScalableTag<std::uint16_t> d16;
  const hn::Rebind<std::uint8_t, decltype(d16)> d8;
  const std::size_t lanes = hn::Lanes(d16);
  for (std::size_t i = 0; i < n; i += lanes) {
    const auto more = hn::PromoteTo(d16, hn::Load(d8, visits + i));
    hn::Store(hn::Add(hn::Load(d16, count + i), more), d16, count + i);
    hn::Store(hn::Zero(d8), d8, visits + i);
  }
#endif
}

}  // namespace HWY_NAMESPACE
}  // namespace stillfield
HWY_AFTER_NAMESPACE();

#if HWY_ONCE
namespace stillfield {

HWY_EXPORT(sum_rows);
HWY_EXPORT(empty_visits);

void sum_label_rows(const LabelBand& band, const std::uint16_t* levels, std::uint16_t missing,
                    LabelSums& sums) {
  HWY_DYNAMIC_DISPATCH(sum_rows)(band, levels, missing, sums);
}

void empty_visits(std::size_t n, std::uint8_t* visits, std::uint16_t* count) {
  HWY_DYNAMIC_DISPATCH(empty_visits)(n, visits, count);
}

void LabelSums::add(const LabelSums& other) {
  const auto accumulate = [](std::vector<std::uint64_t>& to,
                             const std::vector<std::uint64_t>& from) {
    for (std::size_t i = 0; i < to.size(); ++i) to[i] += from[i];
  };
  accumulate(sites, other.sites);
  accumulate(observed, other.observed);
  accumulate(level_sum, other.level_sum);
  accumulate(level_square_sum, other.level_square_sum);
  for (std::size_t r = 0; r < equal_ends.size(); ++r) equal_ends[r] += other.equal_ends[r];
}

}  // namespace stillfield
#endif
