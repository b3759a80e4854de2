#include "reference/intensity_field.h"

#include <cmath>

#include "random/normal.h"

namespace stillfield::reference {
namespace {

struct Pixel {
  int x, y, z;
};

bool by_blocks(const IntensityField& f) {
  return f.neighbourhood.connectivity == Connectivity::kEight ||
         f.neighbourhood.connectivity == Connectivity::kTwentySix;
}

bool blocks_in_z(const IntensityField& f) {
  return f.neighbourhood.connectivity == Connectivity::kTwentySix;
}

std::uint32_t colours(const IntensityField& f) {
  return !by_blocks(f) ? 2 : blocks_in_z(f) ? 8 : 4;
}

std::uint32_t colour_of(const IntensityField& f, Pixel p) {
  const auto parity = [](std::int64_t v) { return static_cast<std::uint32_t>(v & 1); };
  const std::int64_t x = p.x + f.offset.x;
  const std::int64_t y = p.y + f.offset.y;
  const std::int64_t z = p.z + f.offset.z;
  if (!by_blocks(f)) return parity(x + y + z);
  return parity(x) + 2 * parity(y) + (blocks_in_z(f) ? 4 * parity(z) : 0);
}

// `slices`, `slice`: numbers of slices of words a slice of pixels has, and which.
std::uint32_t word_of(const IntensityField& f, Pixel p, std::uint32_t sweep, Purpose purpose,
                      std::uint32_t slices, std::uint32_t slice) {
  const auto x = static_cast<std::uint32_t>(p.x + f.offset.x);
  const auto y = static_cast<std::uint32_t>(p.y + f.offset.y);
  const auto z = static_cast<std::uint32_t>(p.z + f.offset.z);
  return pixel_word(
      f.key, by_blocks(f) ? y / 2 : y, x / 2, sweep,
      counter_word3(purpose, colour_of(f, p), (blocks_in_z(f) ? z / 2 : z) * slices + slice));
}

bool forward(const Displacement& d) {
  return d.z > 0 || (d.z == 0 && (d.y > 0 || (d.y == 0 && d.x > 0)));
}

template <class Visit>
void for_each_pixel(const IntensityField& f, const Visit& visit) {
  for (int z = 0; z < f.extent.depth; ++z) {
    for (int y = 0; y < f.extent.height; ++y) {
      for (int x = 0; x < f.extent.width; ++x) visit(Pixel{x, y, z});
    }
  }
}

template <class Visit>
void for_each_pixel_by_colour(const IntensityField& f, const Visit& visit) {
  for (std::uint32_t colour = 0; colour < colours(f); ++colour) {
    for_each_pixel(f, [&](Pixel p) {
      if (colour_of(f, p) == colour) visit(p);
    });
  }
}

void set_pixel(IntensityField& f, std::size_t s, float x) {
  f.x[s] = x;
  if (f.sum.empty()) return;
  const float d = x - f.shift[s];
  f.sum[s] += d;
  f.square[s] += d * d;
}

float normal_of(const IntensityField& f, Pixel p, std::uint32_t sweep) {
  return standard_normal(word_of(f, p, sweep, Purpose::kIntensity, 1, 0));
}

float draw_precision(float rate, float difference, float z, float u) {
  const float e = rate * std::fabs(difference);
  const float chi = z * z;
  const float root = std::sqrt(chi * (chi + ((e + e) + (e + e))));
  const float small = 2.0f / ((((e + e) + chi) + root) + 1e-12f);
  const float large = 1.0f / (e * (e * small) + 1e-12f);
  return rate * rate * (u * (1.0f + e * small) <= 1.0f ? small : large);
}

}  // namespace

void sweep_smooth(IntensityField& f, std::uint32_t sweep) {
  for_each_pixel_by_colour(f, [&](Pixel p) {
    const std::size_t s = f.at(p.x, p.y, p.z);
    float neighbours = 0.0f;
    double weight = 0.0;
    for (std::size_t r = 0; r < f.neighbourhood.rings.size(); ++r) {
      const NeighbourRing& ring = f.neighbourhood.rings[r];
      float sum = 0.0f;
      for (const Displacement& d : ring.neighbours) {
        if (!f.inside(p.x + d.x, p.y + d.y, p.z + d.z)) continue;
        sum += f.x[f.at(p.x + d.x, p.y + d.y, p.z + d.z)];
        weight += ring.weight;
      }
      neighbours = r == 0 ? sum : neighbours + static_cast<float>(ring.weight) * sum;
    }
    const float hold = f.noise_precision * f.precision[s];
    const float q = f.strength * static_cast<float>(weight) + hold;
    const float r = q > 0.0f ? 1.0f / q : 0.0f;
    const float mean = (f.strength * r) * neighbours + (hold * r) * f.value[s];
    set_pixel(f, s, mean + std::sqrt(r) * normal_of(f, p, sweep));
  });
}

void sweep_edges(IntensityField& f, std::uint32_t sweep) {
  std::vector<Displacement> owned;
  std::vector<float> weight;
  for (const NeighbourRing& ring : f.neighbourhood.rings) {
    for (const Displacement& d : ring.neighbours) {
      if (!forward(d)) continue;
      owned.push_back(d);
      weight.push_back(static_cast<float>(ring.weight));
    }
  }
  f.pair_precision.assign(owned.size(), std::vector<float>(f.x.size()));
  for (std::size_t k = 0; k < owned.size(); ++k) {
    const Displacement& d = owned[k];
    const auto plane = static_cast<std::uint32_t>(2 * k);
    for_each_pixel(f, [&](Pixel p) {
      if (!f.inside(p.x + d.x, p.y + d.y, p.z + d.z)) return;
      const std::size_t s = f.at(p.x, p.y, p.z);
      const float z = standard_normal(word_of(f, p, sweep, Purpose::kPairScale, 32, plane));
      const std::uint32_t word = word_of(f, p, sweep, Purpose::kPairScale, 32, plane + 1);
      const float u = (static_cast<float>(word >> 8) + 0.5f) * (1.0f / 16777216.0f);
      f.pair_precision[k][s] = draw_precision(
          f.strength * weight[k], f.x[s] - f.x[f.at(p.x + d.x, p.y + d.y, p.z + d.z)], z, u);
    });
  }
  for_each_pixel_by_colour(f, [&](Pixel p) {
    const std::size_t s = f.at(p.x, p.y, p.z);
    float sum = 0.0f, q = 0.0f;
    for (const NeighbourRing& ring : f.neighbourhood.rings) {
      for (const Displacement& d : ring.neighbours) {
        const Pixel t{p.x + d.x, p.y + d.y, p.z + d.z};
        if (!f.inside(t.x, t.y, t.z)) continue;
        float omega = 0.0f;
        for (std::size_t k = 0; k < owned.size(); ++k) {
          const Displacement& o = owned[k];
          if (o.x == d.x && o.y == d.y && o.z == d.z) omega = f.pair_precision[k][s];
          if (o.x == -d.x && o.y == -d.y && o.z == -d.z) {
            omega = f.pair_precision[k][f.at(t.x, t.y, t.z)];
          }
        }
        sum += omega * f.x[f.at(t.x, t.y, t.z)];
        q += omega;
      }
    }
    const float hold = f.noise_precision * f.precision[s];
    q += hold;
    const float r = q > 0.0f ? 1.0f / q : 0.0f;
    set_pixel(f, s, (sum + hold * f.value[s]) * r + std::sqrt(r) * normal_of(f, p, sweep));
  });
}

FieldSums sum_field(const IntensityField& f) {
  FieldSums sums;
  for_each_pixel(f, [&](Pixel p) {
    const std::size_t s = f.at(p.x, p.y, p.z);
    const double residual = static_cast<double>(f.value[s]) - static_cast<double>(f.x[s]);
    sums.squared_residuals += static_cast<double>(f.precision[s]) * residual * residual;
    for (const NeighbourRing& ring : f.neighbourhood.rings) {
      for (const Displacement& d : ring.neighbours) {
        if (!forward(d) || !f.inside(p.x + d.x, p.y + d.y, p.z + d.z)) continue;
        const double difference = static_cast<double>(f.x[s]) -
                                  static_cast<double>(f.x[f.at(p.x + d.x, p.y + d.y, p.z + d.z)]);
        sums.squared_differences += ring.weight * difference * difference;
        sums.absolute_differences += ring.weight * std::fabs(difference);
      }
    }
  });
  return sums;
}

}  // namespace stillfield::reference
