#include "sampler/patch_groups.h"

#include <algorithm>
#include <vector>

#include "random/counters.h"
#include "random/stream.h"
#include "sampler/patch_grid.h"
#include "sampler/patch_labels.h"
#include "sampler/patch_wishart.h"
#include "simd/normals.h"
#include "simd/patch_density.h"
#include "simd/patch_group.h"

namespace stillfield {
namespace {

constexpr std::uint32_t kOffsetLane = 7;
constexpr int kCentreColour = 4;
constexpr int kMemberColour = 5;
constexpr int kLabelColour = 6;
constexpr int kDropped = 1;
constexpr int kMaxElements = kMaxPatchSide * kMaxPatchSide;

// Reference patches a tile, along each axis: their squares are whole batches, and two tiles of one
// colour are so far apart that their groups share no pixel. Steps are at least half a side.
int tile_references(int side, int step) {
  return 12 * step >= 2 * kSearchReach + side ? 12 : 16;
}

// Memory of 16 groups.
class GroupBatch {
 public:
  GroupBatch(const Volume<float>& value, const SearchImage& estimate, const PatchTables& tables,
             const GroupPass& settings, PatchSums& sums)
      : value_(value),
        estimate_(estimate),
        tables_(tables),
        sums_(sums),
        d_(tables.elements()),
        members_(settings.members),
        updates_(settings.updates),
        search_(estimate, tables.side),
        where_(static_cast<std::size_t>(settings.members) * kPatchLanes),
        noisy_(patch_floats()),
        clean_(patch_floats()),
        mean_sum_(patch_floats()),
        variance_sum_(static_cast<std::size_t>(d_) * kPatchLanes),
        centre_(static_cast<std::size_t>(d_) * kPatchLanes),
        scale_(static_cast<std::size_t>(triangle_elements(d_)) * kPatchLanes),
        factor_(static_cast<std::size_t>(triangle_elements(d_)) * kPatchLanes),
        coloured_(variance_sum_.size()) {}

  // `label[i]` is the component of reference i; at most kPatchLanes references.
  void run(std::span<const PatchPosition> references, std::span<const int> label,
           WishartStream stream) {
    gather(references, label, stream);
    PatchGroups g;
    g.elements = d_;
    g.members = members_;
    g.value = noisy_.data();
    g.clean = clean_.data();
    g.scale = scale_.data();
    g.factor = factor_.data();
    g.centre = centre_.data();
    g.mean_sum = mean_sum_.data();
    g.variance_sum = variance_sum_.data();
    std::fill_n(mean_sum_.data(), mean_sum_.size(), 0.0f);
    std::fill_n(variance_sum_.data(), variance_sum_.size(), 0.0f);
    std::fill_n(coloured_.data(), coloured_.size(), 0.0f);
    for (int update = 1; update <= updates_; ++update) {
      const bool last = update == updates_;
      ++stream.sweep;
      fill_prior(label);
      fill_bartlett(stream, d_, d_ + 1 + kGroupPriorDegrees + members_, factor_.data());
      fill_normals(stream, kCentreColour, centre_);
      draw_group_parameters(g);
      if (!last) fill_normals(stream, kMemberColour, clean_);
      if (!tables_.whiten.empty() && update > kDropped) add_coloured_variance();
      update_group_patches(g, update > kDropped, !last);
    }
    add_to_sums(references.size());
  }

 private:
  std::size_t patch_floats() const {
    return static_cast<std::size_t>(members_) * static_cast<std::size_t>(d_) * kPatchLanes;
  }

  static void fill_normals(const WishartStream& stream, int colour, AlignedBuffer<float>& out) {
    standard_normals(stream.key,
                     {0, stream.position, stream.sweep,
                      counter_word3(Purpose::kGroup, static_cast<std::uint32_t>(colour), 0)},
                     out.size(), out.data());
  }

  // Copies a patch into one lane.
  void scatter(const float* patch, int member, std::size_t lane, float* out) const {
    out += static_cast<std::size_t>(member * d_) * kPatchLanes + lane;
    for (int e = 0; e < d_; ++e, out += kPatchLanes) *out = patch[e];
  }

  // Members, their data and starts. Lanes without a reference repeat the last one.
  void gather(std::span<const PatchPosition> references, std::span<const int> label,
              const WishartStream& stream) {
    alignas(64) float patch[kMaxElements] = {};
    alignas(64) float start[kMaxElements] = {};
    alignas(64) float normals[kMaxElements];
    const int side = tables_.side;
    for (std::size_t lane = 0; lane < kPatchLanes; ++lane) {
      const std::size_t i = std::min(lane, references.size() - 1);
      PatchPosition* where = where_.data() + lane * static_cast<std::size_t>(members_);
      search_.find(references[i], {where, static_cast<std::size_t>(members_)});
      const ComponentTables& t = tables_.components[static_cast<std::size_t>(label[i])];
      for (int m = 0; m < members_; ++m) {
        for (int y = 0; y < side; ++y) {
          std::copy_n(value_.row(where[m].y + y) + where[m].x, side, patch + y * side);
          std::copy_n(estimate_.row(where[m].y + y) + where[m].x, side, start + y * side);
        }
        whiten(patch);
        scatter(patch, m, lane, noisy_.data());
        const auto block =
            static_cast<std::uint32_t>(static_cast<int>(lane) * members_ + m) * (kMaxElements / 4);
        standard_normals(stream.key,
                         {block, stream.position, stream.sweep,
                          counter_word3(Purpose::kGroup, kMemberColour, 0)},
                         static_cast<std::size_t>(d_), normals);
        multiply_patch(d_, t.draw.data(), normals, nullptr, start, start);
        whiten(start);
        scatter(start, m, lane, clean_.data());
      }
    }
  }

  void whiten(float* patch) const {
    if (tables_.whiten.empty()) return;
    alignas(64) const float zero[kMaxElements] = {};
    multiply_patch(d_, tables_.whiten.data(), patch, nullptr, zero, patch);
  }

  // In place: whitened means to means of pixels.
  void colour(float* mean) const {
    if (tables_.whiten.empty()) return;
    for (int r = d_ - 1; r >= 0; --r) {
      double sum = 0.0;
      for (int k = 0; k <= r; ++k) sum += tables_.colour(r, k) * double{mean[k]};
      mean[r] = static_cast<float>(sum);
    }
  }

  // Variance of pixel e: the squared length of V times row e of L; factor_ holds V.
  void add_coloured_variance() {
    for (int e = 0; e < d_; ++e) {
      float* variance = coloured_.data() + e * kPatchLanes;
      for (int r = 0; r < d_; ++r) {
        float sum[kPatchLanes] = {};
        for (int c = 0; c <= std::min(r, e); ++c) {
          const auto l = static_cast<float>(tables_.colour(e, c));
          const float* v = factor_.data() + triangle_at(r, c) * kPatchLanes;
          for (int lane = 0; lane < kPatchLanes; ++lane) sum[lane] += l * v[lane];
        }
        for (int lane = 0; lane < kPatchLanes; ++lane) variance[lane] += sum[lane] * sum[lane];
      }
    }
  }

  void fill_prior(std::span<const int> label) {
    for (std::size_t lane = 0; lane < kPatchLanes; ++lane) {
      const int k = label[std::min(lane, label.size() - 1)];
      const std::vector<float>& prior = tables_.components[static_cast<std::size_t>(k)].group_prior;
      float* out = scale_.data() + lane;
      for (const float a : prior) {
        *out = a;
        out += kPatchLanes;
      }
    }
  }

  void add_to_sums(std::size_t groups) {
    const float average = 1.0f / static_cast<float>(updates_ - kDropped);
    alignas(64) float precision[kMaxElements];
    alignas(64) float mean[kMaxElements];
    const int side = tables_.side;
    const AlignedBuffer<float>& variance = tables_.whiten.empty() ? variance_sum_ : coloured_;
    for (std::size_t lane = 0; lane < groups; ++lane) {
      for (int e = 0; e < d_; ++e) {
        precision[e] =
            1.0f / (variance[static_cast<std::size_t>(e) * kPatchLanes + lane] * average);
      }
      const PatchPosition* where = where_.data() + lane * static_cast<std::size_t>(members_);
      for (int m = 0; m < members_; ++m) {
        const float* sum = mean_sum_.data() + static_cast<std::size_t>(m * d_) * kPatchLanes + lane;
        for (int e = 0; e < d_; ++e) mean[e] = sum[e * kPatchLanes] * average;
        colour(mean);
        for (int y = 0; y < side; ++y) {
          sums_.add(where[m].x, where[m].y + y, side, mean + y * side, precision + y * side);
        }
      }
    }
  }

  const Volume<float>& value_;
  const SearchImage& estimate_;
  const PatchTables& tables_;
  PatchSums& sums_;
  int d_;
  int members_;
  int updates_;
  PatchSearch search_;
  std::vector<PatchPosition> where_;
  AlignedBuffer<float> noisy_, clean_, mean_sum_, variance_sum_, centre_, scale_, factor_;
  AlignedBuffer<float> coloured_;  // sums of pixel variances; used when the noise is correlated
};

// Labels of a tile's references.
std::vector<int> draw_labels(const Volume<float>& value, const PatchTables& tables,
                             std::span<const PatchPosition> references, PhiloxKey key,
                             std::uint32_t tile, std::uint32_t pass) {
  PatchLabeller labeller(tables);
  std::vector<int> label;
  for (std::size_t first = 0; first < references.size(); first += kDensityBatch) {
    const std::size_t n = std::min(references.size() - first, std::size_t{kDensityBatch});
    labeller.weigh(value, references.subspan(first, n));
    for (std::size_t i = 0; i < n; ++i) {
      const PhiloxCounter word =
          philox4x32({static_cast<std::uint32_t>(first + i), tile, pass << 16,
                      counter_word3(Purpose::kGroup, kLabelColour, 0)},
                     key);
      const double u = open_uniform(std::uint64_t{word[0]} << 32 | word[1]);
      label.push_back(labeller.label(static_cast<int>(i), u));
    }
  }
  return label;
}

}  // namespace

void pass_groups(const Volume<float>& value, const SearchImage& estimate, const PatchTables& tables,
                 const GroupPass& settings, PhiloxKey key, std::uint32_t pass, const Pool& pool,
                 PatchSums& sums) {
  const int side = tables.side;
  const int step = settings.step;
  RandomStream stream(key, Purpose::kGroup, pass, kOffsetLane);
  const int dx = static_cast<int>(stream.uniform() * step);
  const int dy = static_cast<int>(stream.uniform() * step);
  const std::vector<int> xs = covering_positions(value.width(), side, step, dx);
  const std::vector<int> ys = covering_positions(value.height(), side, step, dy);
  const int block = tile_references(side, step);
  const int across = (static_cast<int>(xs.size()) + block - 1) / block;
  const int down = (static_cast<int>(ys.size()) + block - 1) / block;
  const auto run_tile = [&](int tile_x, int tile_y) {
    const std::size_t x0 = static_cast<std::size_t>(tile_x * block);
    const std::size_t y0 = static_cast<std::size_t>(tile_y * block);
    const std::size_t x1 = std::min(xs.size(), x0 + static_cast<std::size_t>(block));
    const std::size_t y1 = std::min(ys.size(), y0 + static_cast<std::size_t>(block));
    std::vector<PatchPosition> references;
    for (std::size_t y = y0; y < y1; ++y) {
      for (std::size_t x = x0; x < x1; ++x) references.push_back({xs[x], ys[y]});
    }
    const auto tile = static_cast<std::uint32_t>(tile_y * across + tile_x);
    const std::vector<int> label = draw_labels(value, tables, references, key, tile, pass);
    GroupBatch batch(value, estimate, tables, settings, sums);
    for (std::size_t first = 0; first < references.size(); first += kPatchLanes) {
      const std::size_t n = std::min(references.size() - first, std::size_t{kPatchLanes});
      const auto number = static_cast<std::uint32_t>(first / kPatchLanes);
      batch.run(std::span(references).subspan(first, n), std::span(label).subspan(first, n),
                {key, tile, pass << 16 | number << 8});
    }
  };
  for (int colour = 0; colour < 4; ++colour) {
    const int first_x = colour % 2;
    const int first_y = colour / 2;
    const int columns = (across - first_x + 1) / 2;
    const int rows = (down - first_y + 1) / 2;
    pool.for_each(columns * rows, [&](int i) {
      run_tile(first_x + 2 * (i % columns), first_y + 2 * (i / columns));
    });
  }
}

}  // namespace stillfield
