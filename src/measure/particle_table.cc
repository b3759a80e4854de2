#include "measure/particle_table.h"

#include <algorithm>
#include <cmath>

#include "diagnose/moments.h"
#include "diagnose/quantile.h"

namespace stillfield {
namespace {

// The bounding box of the usable pixels.
Particle frame_of(View<const std::uint8_t> usable, Extent extent) {
  Particle frame;
  frame.width = extent.width;
  frame.height = extent.height;
  if (usable.extent().sites() == 0) return frame;
  int right = -1, bottom = -1;
  frame.left = extent.width;
  frame.top = extent.height;
  for (int y = 0; y < extent.height; ++y) {
    for (int x = 0; x < extent.width; ++x) {
      if (usable.at(x, y) == 0) continue;
      frame.left = std::min(frame.left, x);
      frame.top = std::min(frame.top, y);
      right = std::max(right, x);
      bottom = y;
    }
  }
  frame.width = right - frame.left + 1;
  frame.height = bottom - frame.top + 1;
  return frame;
}

bool spans(const Particle& p, const Particle& frame) {
  return p.width == frame.width || p.height == frame.height;
}

// The component that may hold more than half of a particle's pixels, by the majority vote of Boyer
// & Moore (1991): if one does, it is the candidate that is left.
struct Candidate {
  std::int32_t component = 0;
  std::int64_t votes = 0;
  std::int64_t overlap = 0;

  void vote(std::int32_t c) {
    if (votes == 0) component = c;
    votes += c == component ? 1 : -1;
  }
};

}  // namespace

ParticleTable::ParticleTable(View<const std::uint8_t> labels, View<const float> grey,
                             View<const std::uint8_t> usable, const LabelMeasureSettings& settings,
                             int chains)
    : row_at_(labels.extent()) {
  const Particle frame = frame_of(usable, labels.extent());
  for (int k = 1; k <= settings.classes; ++k) {
    first_.push_back(rows_.size());
    add_class(k, find_particles(labels, k, usable, settings.particles), grey, frame);
  }
  first_.push_back(rows_.size());
  areas_.assign(static_cast<std::size_t>(chains),
                std::vector<std::vector<std::int64_t>>(rows_.size()));
}

void ParticleTable::add_class(int label, const Particles& found, View<const float> grey,
                              const Particle& frame) {
  const std::size_t before = rows_.size();
  std::vector<std::int32_t> row_of(found.list.size() + 1);
  for (const Particle& p : found.list) {
    if (spans(p, frame)) continue;
    ParticleRow row;
    row.label = label;
    row.particle = p;
    row.particle.component = static_cast<int>(rows_.size() - before) + 1;
    rows_.push_back(row);
    row_of[static_cast<std::size_t>(p.component)] = static_cast<std::int32_t>(rows_.size());
  }
  std::vector<double> sum(rows_.size() - before);
  std::vector<std::int64_t> observed(sum.size());
  for (int y = 0; y < row_at_.height(); ++y) {
    for (int x = 0; x < row_at_.width(); ++x) {
      const auto row = row_of[static_cast<std::size_t>(found.component.at(x, y))];
      if (row == 0) continue;
      row_at_.at(x, y) = row;
      if (!std::isfinite(grey.at(x, y))) continue;
      const std::size_t i = static_cast<std::size_t>(row) - 1 - before;
      sum[i] += double{grey.at(x, y)};
      ++observed[i];
    }
  }
  for (std::size_t i = 0; i < sum.size(); ++i) {
    if (observed[i] > 0) {
      rows_[before + i].mean_intensity = sum[i] / static_cast<double>(observed[i]);
    }
  }
}

void ParticleTable::record(int chain, int label, const Particles& drawn) {
  const std::size_t first = first_[static_cast<std::size_t>(label - 1)];
  const std::size_t last = first_[static_cast<std::size_t>(label)];
  std::vector<Candidate> candidates(last - first);
  const auto for_each_pixel = [&](const auto& visit) {
    for (int y = 0; y < row_at_.height(); ++y) {
      const std::int32_t* row = row_at_.row(y);
      const std::int32_t* component = drawn.component.row(y);
      for (int x = 0; x < row_at_.width(); ++x) {
        const std::size_t at = static_cast<std::size_t>(row[x]) - 1;  // none: past every row
        if (at >= first && at < last) visit(candidates[at - first], component[x]);
      }
    }
  };
  for_each_pixel([](Candidate& c, std::int32_t component) { c.vote(component); });
  for_each_pixel(
      [](Candidate& c, std::int32_t component) { c.overlap += component == c.component ? 1 : 0; });
  auto& areas = areas_[static_cast<std::size_t>(chain)];
  for (std::size_t i = 0; i < candidates.size(); ++i) {
    const Candidate& c = candidates[i];
    if (c.component == 0) continue;
    const std::int64_t area = drawn.list[static_cast<std::size_t>(c.component - 1)].area;
    const std::int64_t half_of = std::max(area, rows_[first + i].particle.area);
    if (2 * c.overlap > half_of) areas[first + i].push_back(area);
  }
}

std::vector<ParticleRow> ParticleTable::rows(int draws) const {
  std::vector<ParticleRow> rows = rows_;
  for (std::size_t i = 0; i < rows.size(); ++i) {
    std::vector<double> areas;
    for (const auto& chain : areas_) areas.insert(areas.end(), chain[i].begin(), chain[i].end());
    if (draws > 0) rows[i].probability = static_cast<double>(areas.size()) / draws;
    if (areas.empty()) continue;
    rows[i].area_mean = mean_of(areas);
    const std::vector<double> sorted = sorted_copy(areas);
    rows[i].area_lower90 = quantile_of_sorted(sorted, 0.05);
    rows[i].area_upper90 = quantile_of_sorted(sorted, 0.95);
  }
  return rows;
}

}  // namespace stillfield
