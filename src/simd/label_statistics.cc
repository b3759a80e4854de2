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

struct StatisticsRow {
  const std::uint8_t* labels;
  const std::uint16_t* levels;
  int parity;
  int sites;
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

#if HWY_TARGET == HWY_SCALAR

HWY_INLINE void sum_row(const LabelBand& band, const StatisticsRow& row, std::uint16_t missing,
                        LabelSums& sums) {
  for (int s = 0; s < row.sites; ++s) sum_site(band, row, missing, s, sums);
}

#else

template <class V>
HWY_INLINE std::uint64_t total_lanes(V v) {
  const hn::ScalableTag<std::uint32_t> d;
  HWY_ALIGN std::uint32_t lane[hn::MaxLanes(hn::ScalableTag<std::uint32_t>())];
  hn::Store(v, d, lane);
  std::uint64_t sum = 0;
  for (std::size_t i = 0; i < hn::Lanes(d); ++i) sum += lane[i];
  return sum;
}

// Words [first, last) whose four sites are all inside the image. Accumulators are 32-bit: a row
// of fewer than 2^20 words cannot overflow them.
HWY_INLINE void sum_words(const LabelBand& band, const StatisticsRow& row, std::uint16_t missing,
                          int last, LabelSums& sums) {
  const hn::ScalableTag<std::uint32_t> d32;
  const hn::ScalableTag<std::uint8_t> d8;
  const hn::Rebind<std::uint16_t, decltype(d32)> d16;
  const int lanes = static_cast<int>(hn::Lanes(d32));
  const auto one = hn::Set(d32, 1u);
  const auto low_half = hn::Set(d32, 0xFFFFu);
  const auto low_byte = hn::Set(d32, 0xFFu);
  const auto none = hn::Set(d32, std::uint32_t{missing});
  for (int k = 0; k < band.classes; ++k) {
    const auto wanted = hn::Set(d32, static_cast<std::uint32_t>(k));
    auto sites = hn::Zero(d32), observed = hn::Zero(d32), level_sum = hn::Zero(d32);
    auto square_low = hn::Zero(d32), square_high = hn::Zero(d32);
    for (int i = 0; i < last; i += lanes) {
      const auto word = hn::BitCast(d32, hn::LoadU(d8, row.labels + 4 * i));
      const auto add = [&](auto label, int b) HWY_ATTR {
        const auto is_k = hn::VecFromMask(d32, hn::Eq(label, wanted));
        const auto level = hn::PromoteTo(d32, hn::LoadU(d16, row.levels + b * band.words + i));
        const auto is_seen = hn::AndNot(hn::VecFromMask(d32, hn::Eq(level, none)), is_k);
        const auto kept = hn::And(level, is_seen);
        const auto square = hn::Mul(kept, kept);
        sites = hn::Add(sites, hn::And(is_k, one));
        observed = hn::Add(observed, hn::And(is_seen, one));
        level_sum = hn::Add(level_sum, kept);
        square_low = hn::Add(square_low, hn::And(square, low_half));
        square_high = hn::Add(square_high, hn::ShiftRight<16>(square));
      };
      add(hn::And(word, low_byte), 0);
      add(hn::And(hn::ShiftRight<8>(word), low_byte), 1);
      add(hn::And(hn::ShiftRight<16>(word), low_byte), 2);
      add(hn::ShiftRight<24>(word), 3);
    }
    const auto c = static_cast<std::size_t>(k);
    sums.sites[c] += total_lanes(sites);
    sums.observed[c] += total_lanes(observed);
    sums.level_sum[c] += total_lanes(level_sum);
    sums.level_square_sum[c] += total_lanes(square_low) + (total_lanes(square_high) << 16);
  }
  for (int r = 0; r < band.ring_count; ++r) {
    const Ring& ring = band.rings[static_cast<std::size_t>(r)];
    auto equal = hn::Zero(d32);
    for (int i = 0; i < last; i += lanes) {
      const std::uint8_t* at = row.labels + 4 * i;
      const auto label = hn::LoadU(d8, at);
      auto n = hn::Zero(d8);
      for (int t = 0; t < ring.neighbours; ++t) {
        const auto other = hn::LoadU(d8, at + ring.offset[row.parity][t]);
        n = hn::Sub(n, hn::VecFromMask(d8, hn::Eq(label, other)));
      }
      const auto word = hn::BitCast(d32, n);
      equal = hn::Add(equal, hn::Add(hn::And(word, low_byte),
                                     hn::And(hn::ShiftRight<8>(word), low_byte)));
      equal = hn::Add(equal, hn::Add(hn::And(hn::ShiftRight<16>(word), low_byte),
                                     hn::ShiftRight<24>(word)));
    }
    sums.equal_ends[static_cast<std::size_t>(r)] += total_lanes(equal);
  }
}

HWY_INLINE void sum_row(const LabelBand& band, const StatisticsRow& row, std::uint16_t missing,
                        LabelSums& sums) {
  // Words before `full` hold four inner sites; the last quarter ends at `sites`.
  const int q = band.words;
  const int lanes = static_cast<int>(hn::Lanes(hn::ScalableTag<std::uint32_t>()));
  const int full = std::clamp(row.sites - 3 * q, 0, q) / lanes * lanes;
  sum_words(band, row, missing, full, sums);
  for (int b = 0; b < 4; ++b) {
    for (int s = b * q + full; s < std::min((b + 1) * q, row.sites); ++s) {
      sum_site(band, row, missing, s, sums);
    }
  }
}

#endif  // HWY_TARGET

void sum_label_rows(const LabelBand& band, const std::uint16_t* levels, std::uint16_t missing,
                    LabelSums& sums) {
  for (int r = band.first_row; r < band.first_row + band.rows; ++r) {
    const int parity = r & 1;
    sum_row(band,
            {band.labels + r * band.label_stride, levels + r * band.weight_stride, parity,
             band.sites[static_cast<std::size_t>(parity)]},
            missing, sums);
  }
}

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

HWY_EXPORT(sum_label_rows);
HWY_EXPORT(empty_visits);

void sum_label_rows(const LabelBand& band, const std::uint16_t* levels, std::uint16_t missing,
                    LabelSums& sums) {
  HWY_DYNAMIC_DISPATCH(sum_label_rows)(band, levels, missing, sums);
}

void empty_visits(std::size_t n, std::uint8_t* visits, std::uint16_t* count) {
  HWY_DYNAMIC_DISPATCH(empty_visits)(n, visits, count);
}

void LabelSums::add(const LabelSums& other) {
  const auto accumulate = [](std::vector<std::uint64_t>& to, const std::vector<std::uint64_t>& from) {
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
