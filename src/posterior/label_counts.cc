#include "posterior/label_counts.h"

#include <algorithm>
#include <array>
#include <cmath>

#include "core/elementary.h"
#include "simd/label_statistics.h"

namespace stillfield {
namespace {

constexpr double kBitsPerNat = 1.4426950408889634;

struct Batch {
  const std::uint16_t* count;
  double sweeps;
};

// Sums over one row of pixels, for quality().
struct RowQuality {
  std::array<double, kMaxLabels> variance{};
  std::int64_t worst = 0;
};

}  // namespace

LabelCounts::LabelCounts(const Colouring& colouring, int classes, int chains, int first_part)
    : colouring_(&colouring), classes_(classes), first_part_(first_part) {
  for (int c = 0; c < chains; ++c) {
    ChainCounts& counts = chains_.emplace_back();
    for (auto& part : counts.part) {
      part = AlignedBuffer<std::uint16_t>(colouring.plane_elements() *
                                          static_cast<std::size_t>(classes - 1));
    }
  }
}

void LabelCounts::take(int chain_number, LabelChain& chain) {
  ChainCounts& counts = chains_[static_cast<std::size_t>(chain_number)];
  const int part = counts.sweeps[0] < first_part_ ? 0 : 1;
  empty_visits(chain.visits.size(), chain.visits.data(), counts.part[part].data());
  counts.sweeps[part] += chain.visits_pending;
  chain.visits_pending = 0;
}

void LabelCounts::merge_parts() {
  for (ChainCounts& counts : chains_) {
    if (counts.sweeps[1] < 2 * counts.sweeps[0]) continue;
    for (std::size_t i = 0; i < counts.part[0].size(); ++i) {
      counts.part[0][i] = static_cast<std::uint16_t>(counts.part[0][i] + counts.part[1][i]);
      counts.part[1][i] = 0;
    }
    counts.sweeps[0] += counts.sweeps[1];
    counts.sweeps[1] = 0;
  }
}

int LabelCounts::sweeps() const {
  return chains_.front().sweeps[0] + chains_.front().sweeps[1];
}

ProbabilityQuality LabelCounts::quality(const Pool& pool, const ObservedField* field) const {
  const Colouring& c = *colouring_;
  double total = 0.0;
  std::vector<Batch> batches;
  for (const ChainCounts& counts : chains_) {
    for (int p = 0; p < 2; ++p) {
      if (counts.sweeps[p] == 0) continue;
      batches.push_back({counts.part[p].data(), static_cast<double>(counts.sweeps[p])});
      total += counts.sweeps[p];
    }
  }
  ProbabilityQuality quality;
  if (batches.size() < 2) return quality;
  const double correction =
      static_cast<double>(batches.size()) / static_cast<double>(batches.size() - 1);
  std::array<double, kMaxLabels> variance{};
  std::int64_t worst = 0;
  for (int colour = 0; colour < c.colours(); ++colour) {
    for (int slice = 0; slice < c.slices(colour); ++slice) {
      std::vector<RowQuality> rows(static_cast<std::size_t>(c.rows(colour)));
      pool.for_bands(c.rows(colour), 16, [&](int first, int last) {
        for (int row = first; row < last; ++row) {
          RowQuality& sums = rows[static_cast<std::size_t>(row)];
          const std::size_t at = c.plane_row(colour, slice, row);
          for (int j = 0; j < c.sites(colour, slice, row); ++j) {
            if (field && field->level[at + static_cast<std::size_t>(j)] == field->grey->missing()) {
              continue;
            }
            bool bad = false;
            for (int k = 1; k < classes_; ++k) {
              const std::size_t i =
                  static_cast<std::size_t>(k - 1) * c.plane_elements() + at + c.byte_of(j);
              double n = 0.0;
              for (const Batch& b : batches) n += b.count[i];
              if (n == 0.0 || n == total) continue;  // never moved: no variance, no R-hat
              const double p = n / total;
              double within = 0.0, between = 0.0, mean_variance = 0.0;
              for (const Batch& b : batches) {
                const double share = b.sweeps / total;
                const double pj = b.count[i] / b.sweeps;
                within += share * pj * (1.0 - pj);
                between += share * (pj - p) * (pj - p);
                mean_variance += share * share * (pj - p) * (pj - p);
              }
              sums.variance[static_cast<std::size_t>(k)] += correction * mean_variance;
              bad = bad || within + correction * between > kPixelRhat * kPixelRhat * within;
            }
            sums.worst += bad;
          }
        }
      });
      for (const RowQuality& sums : rows) {
        for (std::size_t k = 0; k < variance.size(); ++k) variance[k] += sums.variance[k];
        worst += sums.worst;
      }
    }
  }
  const auto pixels = static_cast<double>(field ? field->grey->observed : c.extent().sites());
  quality.mcse = std::sqrt(*std::max_element(variance.begin(), variance.end()) / pixels);
  quality.worst_share = static_cast<double>(worst) / pixels;
  return quality;
}

template <class Visit>
void LabelCounts::for_each_pixel(const Visit& visit) const {
  const Colouring& c = *colouring_;
  const int total = sweeps() * static_cast<int>(chains_.size());
  std::array<int, kMaxLabels> n{};
  for (int colour = 0; colour < c.colours(); ++colour) {
    for (int slice = 0; slice < c.slices(colour); ++slice) {
      for (int row = 0; row < c.rows(colour); ++row) {
        const std::size_t at = c.plane_row(colour, slice, row);
        const int x = c.first_x(colour, slice, row);
        for (int j = 0; j < c.sites(colour, slice, row); ++j) {
          n[0] = total;
          for (int k = 1; k < classes_; ++k) {
            const std::size_t i =
                static_cast<std::size_t>(k - 1) * c.plane_elements() + at + c.byte_of(j);
            int visits = 0;
            for (const ChainCounts& counts : chains_)
              visits += counts.part[0][i] + counts.part[1][i];
            n[static_cast<std::size_t>(k)] = visits;
            n[0] -= visits;
          }
          visit(x + 2 * j, c.y_of(colour, row), c.z_of(colour, slice), n);
        }
      }
    }
  }
}

Volume<float> LabelCounts::probability(int k) const {
  Volume<float> out(colouring_->extent());
  const double total = static_cast<double>(sweeps()) * static_cast<double>(chains_.size());
  for_each_pixel([&](int x, int y, int z, const auto& n) {
    out.at(x, y, z) = static_cast<float>(n[static_cast<std::size_t>(k)] / total);
  });
  return out;
}

Volume<std::uint8_t> LabelCounts::most_probable() const {
  Volume<std::uint8_t> out(colouring_->extent());
  for_each_pixel([&](int x, int y, int z, const auto& n) {
    const auto best = std::max_element(n.begin(), n.begin() + classes_) - n.begin();
    out.at(x, y, z) = static_cast<std::uint8_t>(best + 1);
  });
  return out;
}

Volume<float> LabelCounts::entropy() const {
  Volume<float> out(colouring_->extent());
  const double total = static_cast<double>(sweeps()) * static_cast<double>(chains_.size());
  for_each_pixel([&](int x, int y, int z, const auto& n) {
    double bits = 0.0;
    for (int k = 0; k < classes_; ++k) {
      const double p = n[static_cast<std::size_t>(k)] / total;
      if (p > 0.0 && p < 1.0) bits -= p * exact_log(p) * kBitsPerNat;
    }
    out.at(x, y, z) = static_cast<float>(bits);
  });
  return out;
}

}  // namespace stillfield
