#include "model/patch_sample.h"

#include <algorithm>

#include "random/stream.h"
#include "simd/patch_density.h"

namespace stillfield {
namespace {

constexpr int kLloydSteps = 2;

enum StreamLane : std::uint32_t { kPositions = 0, kSeeds = 1 };

double plane_mean(const Volume<float>& v) {
  double total = 0.0;
  for (int y = 0; y < v.height(); ++y) {
    double row = 0.0;
    for (int x = 0; x < v.width(); ++x) row += double{v.at(x, y)};
    total += row;
  }
  return total / static_cast<double>(v.extent().sites());
}

double squared_distance(const float* a, const float* b, int elements) {
  double sum = 0.0;
  for (int e = 0; e < elements; ++e) {
    const double off = double{a[e]} - double{b[e]};
    sum += off * off;
  }
  return sum;
}

void copy_patch(const Volume<float>& v, int side, int x0, int y0, double centre, double unit,
                float* out) {
  for (int y = 0; y < side; ++y) {
    for (int x = 0; x < side; ++x) {
      out[y * side + x] = static_cast<float>((double{v.at(x0 + x, y0 + y)} - centre) / unit);
    }
  }
}

}  // namespace

const float* PatchSample::row(std::size_t i) const {
  return rows.data() + i * static_cast<std::size_t>(patch_stride(elements));
}

PatchSample draw_patch_sample(std::span<const PatchPlane> planes, int side, std::size_t most,
                              PhiloxKey key) {
  PatchSample sample;
  sample.elements = side * side;
  std::size_t positions = 0;
  sample.unit = 0.0;
  for (const PatchPlane& p : planes) {
    positions += static_cast<std::size_t>(p.value->width() - side + 1) *
                 static_cast<std::size_t>(p.value->height() - side + 1);
    sample.centre += plane_mean(*p.value) / static_cast<double>(planes.size());
    sample.unit += p.noise_sd / static_cast<double>(planes.size());
  }
  sample.size = std::min(positions, most);
  const auto stride = static_cast<std::size_t>(patch_stride(sample.elements));
  sample.rows = AlignedBuffer<float>(sample.size * stride);
  RandomStream stream(key, Purpose::kTiling, 0xffffffffu, kPositions);
  const double stretch = static_cast<double>(positions) / static_cast<double>(sample.size);
  std::size_t next = 0;   // patch of the sample
  std::size_t begin = 0;  // position at which the plane starts
  const auto draw_position = [&](std::size_t i) {
    if (positions == sample.size) return i;
    const double at = (static_cast<double>(i) + stream.uniform()) * stretch;
    return std::min(static_cast<std::size_t>(at), positions - 1);
  };
  std::size_t position = draw_position(0);
  for (const PatchPlane& p : planes) {
    const auto across = static_cast<std::size_t>(p.value->width() - side + 1);
    const std::size_t count = across * static_cast<std::size_t>(p.value->height() - side + 1);
    sample.plane_start.push_back(next);
    sample.plane_noise_sd.push_back(p.noise_sd / sample.unit);
    while (next < sample.size && position < begin + count) {
      const std::size_t local = position - begin;
      copy_patch(*p.value, side, static_cast<int>(local % across), static_cast<int>(local / across),
                 sample.centre, sample.unit, sample.rows.data() + next * stride);
      if (++next < sample.size) position = draw_position(next);
    }
    begin += count;
  }
  sample.plane_start.push_back(next);
  return sample;
}

std::vector<std::uint32_t> first_partition(const PatchSample& sample, int components,
                                           PhiloxKey key) {
  const auto d = static_cast<std::size_t>(sample.elements);
  std::vector<std::uint32_t> label(sample.size, 0);
  std::vector<double> nearest(sample.size, 1e300);
  std::vector<std::vector<float>> seeds;
  RandomStream stream(key, Purpose::kTiling, 0xffffffffu, kSeeds);
  const auto add_seed = [&](std::size_t i) {
    seeds.emplace_back(sample.row(i), sample.row(i) + d);
  };
  const auto assign = [&](std::uint32_t k) {
    for (std::size_t i = 0; i < sample.size; ++i) {
      const double off = squared_distance(sample.row(i), seeds[k].data(), sample.elements);
      if (off < nearest[i]) {
        nearest[i] = off;
        label[i] = k;
      }
    }
  };
  add_seed(static_cast<std::size_t>(stream.uniform() * static_cast<double>(sample.size)));
  for (std::uint32_t k = 0; static_cast<int>(k) < components; ++k) {
    assign(k);
    if (static_cast<int>(k) + 1 == components) break;
    double total = 0.0;
    for (const double n : nearest) total += n;
    double target = stream.uniform() * total;
    std::size_t i = 0;
    while (i + 1 < sample.size && (target -= nearest[i]) >= 0.0) ++i;
    add_seed(i);
  }
  for (int step = 0; step < kLloydSteps; ++step) {
    std::vector<std::vector<double>> sum(seeds.size(), std::vector<double>(d, 0.0));
    std::vector<double> count(seeds.size(), 0.0);
    for (std::size_t i = 0; i < sample.size; ++i) {
      count[label[i]] += 1.0;
      for (std::size_t e = 0; e < d; ++e) sum[label[i]][e] += double{sample.row(i)[e]};
    }
    for (std::size_t k = 0; k < seeds.size(); ++k) {
      if (count[k] == 0.0) continue;
      for (std::size_t e = 0; e < d; ++e) seeds[k][e] = static_cast<float>(sum[k][e] / count[k]);
    }
    nearest.assign(sample.size, 1e300);
    for (std::uint32_t k = 0; static_cast<int>(k) < components; ++k) assign(k);
  }
  return label;
}

}  // namespace stillfield
