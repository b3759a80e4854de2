#include "reference/label_field.h"

#include "core/elementary.h"

namespace stillfield::reference {
namespace {

struct Pixel {
  int x, y, z;
};

bool by_blocks(const LabelField& f) {
  return f.neighbourhood.connectivity == Connectivity::kEight ||
         f.neighbourhood.connectivity == Connectivity::kTwentySix;
}

bool blocks_in_z(const LabelField& f) {
  return f.neighbourhood.connectivity == Connectivity::kTwentySix;
}

std::uint32_t colour_of(const LabelField& f, Pixel p) {
  const auto parity = [](std::int64_t v) { return static_cast<std::uint32_t>(v & 1); };
  const std::int64_t x = p.x + f.offset.x;
  const std::int64_t y = p.y + f.offset.y;
  const std::int64_t z = p.z + f.offset.z;
  if (!by_blocks(f)) return parity(x + y + z);
  return parity(x) + 2 * parity(y) + (blocks_in_z(f) ? 4 * parity(z) : 0);
}

// The pixel's 24-bit uniform integer.
float uniform_integer(const LabelField& f, Pixel p, std::uint32_t sweep) {
  const auto x = static_cast<std::uint32_t>(p.x + f.offset.x);
  const auto y = static_cast<std::uint32_t>(p.y + f.offset.y);
  const auto z = static_cast<std::uint32_t>(p.z + f.offset.z);
  const std::uint32_t word =
      pixel_word(f.key, by_blocks(f) ? y / 2 : y, x / 2, sweep,
                 counter_word3(f.purpose, colour_of(f, p), blocks_in_z(f) ? z / 2 : z));
  return static_cast<float>(word >> 8);
}

int ring_size(const NeighbourRing& ring) {
  return static_cast<int>(ring.neighbours.size());
}

int equal_in_ring(const LabelField& f, const NeighbourRing& ring, Pixel p, int k) {
  int n = 0;
  for (const Displacement& d : ring.neighbours) {
    const Pixel q{p.x + d.x, p.y + d.y, p.z + d.z};
    n += f.inside(q.x, q.y, q.z) && f.label[f.at(q.x, q.y, q.z)] == k;
  }
  return n;
}

std::uint8_t draw_two(const LabelField& f, Pixel p, float uniform) {
  double missing = 0.0;
  for (const NeighbourRing& ring : f.neighbourhood.rings) {
    int outside = 0;
    for (const Displacement& d : ring.neighbours) {
      outside += !f.inside(p.x + d.x, p.y + d.y, p.z + d.z);
    }
    missing += ring.weight * outside;
  }
  float odds = f.table.value[f.level[f.at(p.x, p.y, p.z)]];
  odds *= static_cast<float>(exact_exp(-f.beta * missing));
  for (const NeighbourRing& ring : f.neighbourhood.rings) {
    const int ones = equal_in_ring(f, ring, p, 1);
    odds *= static_cast<float>(exact_exp(f.beta * ring.weight * (ring_size(ring) - 2 * ones)));
  }
  return uniform * (1.0f + odds) < 16777216.0f;
}

std::uint8_t draw_many(const LabelField& f, Pixel p, float uniform) {
  std::vector<float> running;
  for (int k = 0; k < f.classes; ++k) {
    float w =
        f.table.value[static_cast<std::size_t>(k) * f.table.levels + f.level[f.at(p.x, p.y, p.z)]];
    for (const NeighbourRing& ring : f.neighbourhood.rings) {
      w *= static_cast<float>(exact_exp(f.beta * ring.weight * equal_in_ring(f, ring, p, k)));
    }
    running.push_back(k == 0 ? w : running.back() + w);
  }
  const float target = uniform * (1.0f / 16777216.0f) * running.back();
  std::uint8_t label = 0;
  for (int k = 0; k + 1 < f.classes; ++k) {
    if (running[static_cast<std::size_t>(k)] <= target) ++label;
  }
  return label;
}

template <class Visit>
void for_each_pixel(const LabelField& f, const Visit& visit) {
  for (int z = 0; z < f.extent.depth; ++z) {
    for (int y = 0; y < f.extent.height; ++y) {
      for (int x = 0; x < f.extent.width; ++x) visit(Pixel{x, y, z});
    }
  }
}

}  // namespace

void sweep_field(LabelField& f, std::uint32_t sweep) {
  const std::uint32_t colours = !by_blocks(f) ? 2 : blocks_in_z(f) ? 8 : 4;
  f.visits.resize(static_cast<std::size_t>(f.classes - 1), std::vector<int>(f.label.size()));
  for (std::uint32_t colour = 0; colour < colours; ++colour) {
    for_each_pixel(f, [&](Pixel p) {
      if (colour_of(f, p) != colour) return;
      const float u = uniform_integer(f, p, sweep);
      const std::uint8_t label = f.classes == 2 ? draw_two(f, p, u) : draw_many(f, p, u);
      const std::size_t at = f.at(p.x, p.y, p.z);
      f.label[at] = label;
      if (label > 0) ++f.visits[label - std::size_t{1}][at];
    });
  }
}

FieldTotals total_field(const LabelField& f, std::uint16_t missing) {
  FieldTotals t;
  for (auto* sums : {&t.sites, &t.observed, &t.level_sum, &t.level_square_sum}) {
    sums->assign(static_cast<std::size_t>(f.classes), 0);
  }
  t.equal_pairs.assign(f.neighbourhood.rings.size(), 0);
  for_each_pixel(f, [&](Pixel p) {
    const std::size_t at = f.at(p.x, p.y, p.z);
    const std::size_t k = f.label[at];
    const std::uint64_t level = f.level[at];
    ++t.sites[k];
    if (level != missing) {
      ++t.observed[k];
      t.level_sum[k] += level;
      t.level_square_sum[k] += level * level;
    }
    for (std::size_t r = 0; r < f.neighbourhood.rings.size(); ++r) {
      for (const Displacement& d : f.neighbourhood.rings[r].neighbours) {
        // Of the two ends of a pair only the one that looks forward counts it.
        const bool forward = d.z > 0 || (d.z == 0 && (d.y > 0 || (d.y == 0 && d.x > 0)));
        if (!forward || !f.inside(p.x + d.x, p.y + d.y, p.z + d.z)) continue;
        t.equal_pairs[r] += f.label[f.at(p.x + d.x, p.y + d.y, p.z + d.z)] == k;
      }
    }
  });
  return t;
}

}  // namespace stillfield::reference
