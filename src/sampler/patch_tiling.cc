#include "sampler/patch_tiling.h"

#include <algorithm>
#include <cmath>
#include <vector>

#include "random/counters.h"
#include "random/stream.h"
#include "sampler/patch_grid.h"
#include "sampler/patch_labels.h"
#include "simd/normals.h"
#include "simd/patch_density.h"

namespace stillfield {
namespace {

constexpr std::uint32_t kOffsetLane = 7;
constexpr std::uint32_t kLabelColour = 0;
constexpr std::uint32_t kNormalColour = 1;
constexpr float kLeastVariance = 1e-6f;
constexpr int kMaxElements = kMaxPatchSide * kMaxPatchSide;

struct Tiling {
  std::vector<int> x, y;
  int regular_first = 0, regular_last = 0;  // rows of patches that do not overlap one another
};

Tiling draw_tiling(const Volume<float>& value, int side, PhiloxKey key, std::uint32_t sweep) {
  RandomStream stream(key, Purpose::kTiling, sweep, kOffsetLane);
  const int dx = static_cast<int>(stream.uniform() * side);
  const int dy = static_cast<int>(stream.uniform() * side);
  Tiling t;
  t.x = covering_positions(value.width(), side, side, dx);
  t.y = covering_positions(value.height(), side, side, dy);
  const int rows = static_cast<int>(t.y.size());
  t.regular_first = dy > 0 ? 1 : 0;
  t.regular_last = rows > 1 && t.y[static_cast<std::size_t>(rows - 1)] <
                                   t.y[static_cast<std::size_t>(rows - 2)] + side
                       ? rows - 1
                       : rows;
  t.regular_last = std::max(t.regular_last, t.regular_first);
  return t;
}

// Calls visit(position, labeller, number in the labeller) for the patches of one row, in order.
template <class Visit>
void for_row(const Volume<float>& value, const PatchTables& tables, const Tiling& tiling, int row,
             const Visit& visit) {
  PatchLabeller labeller(tables);
  std::vector<PatchPosition> batch;
  for (std::size_t first = 0; first < tiling.x.size(); first += kDensityBatch) {
    const std::size_t last = std::min(tiling.x.size(), first + kDensityBatch);
    batch.clear();
    for (std::size_t i = first; i < last; ++i) {
      batch.push_back({tiling.x[i], tiling.y[static_cast<std::size_t>(row)]});
    }
    labeller.weigh(value, batch);
    for (std::size_t i = 0; i < batch.size(); ++i) visit(batch[i], labeller, static_cast<int>(i));
  }
}

// Runs the rows of a tiling: regular ones in parallel, then those that overlap them.
template <class Row>
void for_rows(const Tiling& tiling, const Pool& pool, const Row& row) {
  pool.for_bands(tiling.regular_last - tiling.regular_first, 2, [&](int first, int last) {
    for (int r = first; r < last; ++r) row(tiling.regular_first + r);
  });
  if (tiling.regular_first > 0) row(0);
  if (tiling.regular_last < static_cast<int>(tiling.y.size())) row(tiling.regular_last);
}

// Moments of a patch given its data, labels summed out.
struct PatchMoments {
  alignas(64) float mean[kMaxElements];
  alignas(64) float precision[kMaxElements];
};

void mix_moments(const PatchTables& tables, const float* y, const PatchLabeller& labeller,
                 int patch, PatchMoments& out) {
  const int d = tables.elements();
  alignas(64) float mean[kMaxElements];
  // Relative to the data, so that the difference of squares does not cancel.
  float off_sum[kMaxElements] = {};
  float square_sum[kMaxElements] = {};
  float total = 0.0f;
  for (int k = 0; k < tables.size(); ++k) {
    const float share = labeller.probability(k, patch);
    if (share < kLeastTilingShare) continue;
    const ComponentTables& t = tables.components[static_cast<std::size_t>(k)];
    multiply_patch(d, t.gain.data(), y, t.mean.data(), t.mean.data(), mean);
    total += share;
    for (int e = 0; e < d; ++e) {
      const float off = mean[e] - y[e];
      off_sum[e] += share * off;
      square_sum[e] += share * (off * off + t.variance[static_cast<std::size_t>(e)]);
    }
  }
  const float scale = 1.0f / total;
  for (int e = 0; e < d; ++e) {
    const float off = off_sum[e] * scale;
    out.mean[e] = y[e] + off;
    out.precision[e] = 1.0f / std::max(square_sum[e] * scale - off * off, kLeastVariance);
  }
}

int draw_label(const PatchLabeller& labeller, int patch, PhiloxCounter counter, PhiloxKey key) {
  const PhiloxCounter word = philox4x32(counter, key);
  return labeller.label(patch, open_uniform(std::uint64_t{word[0]} << 32 | word[1]));
}

}  // namespace

void sweep_tiling(const Volume<float>& value, const PatchTables& tables, PhiloxKey key,
                  std::uint32_t sweep, const Pool& pool, PatchSums& sums) {
  const int side = tables.side;
  const Tiling tiling = draw_tiling(value, side, key, sweep);
  for_rows(tiling, pool, [&](int row) {
    alignas(64) float y[kMaxElements] = {};
    PatchMoments moments;
    for_row(
        value, tables, tiling, row, [&](PatchPosition at, const PatchLabeller& labeller, int i) {
          copy_patch(value, side, at, y);
          mix_moments(tables, y, labeller, i, moments);
          for (int r = 0; r < side; ++r) {
            sums.add(at.x, at.y + r, side, moments.mean + r * side, moments.precision + r * side);
          }
        });
  });
}

Volume<float> draw_tiling_deviation(const Volume<float>& value, const PatchTables& tables,
                                    PhiloxKey key, std::uint32_t sweep, const Pool& pool) {
  const int side = tables.side;
  const int d = tables.elements();
  const Offset offset = value.view().offset();
  const Tiling tiling = draw_tiling(value, side, key, sweep);
  Volume<float> out(value.extent());
  for_rows(tiling, pool, [&](int row) {
    alignas(64) const float zero[kMaxElements] = {};
    alignas(64) float normals[kMaxElements];
    alignas(64) float deviation[kMaxElements];
    for_row(value, tables, tiling, row,
            [&](PatchPosition at, const PatchLabeller& labeller, int i) {
              const auto x = static_cast<std::uint32_t>(offset.x + at.x);
              const auto y = static_cast<std::uint32_t>(offset.y + at.y);
              const auto counter = [&](std::uint32_t c0, std::uint32_t colour) {
                return PhiloxCounter{c0, y, sweep, counter_word3(Purpose::kTiling, colour, 0)};
              };
              const int k = draw_label(labeller, i, counter(x, kLabelColour), key);
              const ComponentTables& t = tables.components[static_cast<std::size_t>(k)];
              standard_normals(key, counter(16 * x, kNormalColour), static_cast<std::size_t>(d),
                               normals);
              multiply_patch(d, t.draw.data(), normals, nullptr, zero, deviation);
              for (int e = 0; e < d; ++e) {
                out.at(at.x + e % side, at.y + e / side) =
                    deviation[e] / std::sqrt(t.variance[static_cast<std::size_t>(e)]);
              }
            });
  });
  return out;
}

}  // namespace stillfield
