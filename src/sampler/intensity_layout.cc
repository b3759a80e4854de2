#include "sampler/intensity_layout.h"

#include <algorithm>

namespace stillfield {
namespace {

constexpr std::ptrdiff_t kGuardColumns = 16;

// Of the two ends of a pair, the one that looks forward owns it.
bool looks_forward(const Displacement& d) {
  return d.z > 0 || (d.z == 0 && (d.y > 0 || (d.y == 0 && d.x > 0)));
}

int pairs_along(int size, int step) {
  return std::max(0, size - (step < 0 ? -step : step));
}

}  // namespace

IntensityLayout::IntensityLayout(Extent extent, const Neighbourhood& neighbourhood, Offset offset)
    : colouring_(extent, neighbourhood, offset), offset_(offset) {
  columns_ =
      static_cast<int>(round_up(static_cast<std::size_t>((extent.width + 1) / 2), kColumnQuantum));
  for (int colour = 0; colour < colouring_.colours(); ++colour) {
    max_rows_ = std::max(max_rows_, colouring_.rows(colour));
    max_slices_ = std::max(max_slices_, colouring_.slices(colour));
  }
  guard_slices_ = colouring_.volume() ? 1 : 0;
  // One guard between rows serves both, the one after the last row included.
  stride_ = columns_ + kGuardColumns;
  // Rows a multiple of 4096 bytes apart would compete for the same cache lines.
  if (stride_ % 1024 == 0) stride_ += kGuardColumns;
  const auto rows = static_cast<std::size_t>(colouring_.colours()) *
                    static_cast<std::size_t>(max_slices_ + 2 * guard_slices_) *
                    static_cast<std::size_t>(max_rows_ + 2);
  elements_ = rows * static_cast<std::size_t>(stride_) + kGuardColumns;
  for (const NeighbourRing& ring : neighbourhood.rings) {
    for (const Displacement& d : ring.neighbours) {
      if (!looks_forward(d)) continue;
      ++pair_planes_;
      pairs_ += std::int64_t{pairs_along(extent.width, d.x)} * pairs_along(extent.height, d.y) *
                pairs_along(extent.depth, d.z);
    }
  }
}

std::size_t IntensityLayout::element(int colour, int slice, int row) const {
  const auto slices = static_cast<std::size_t>(max_slices_ + 2 * guard_slices_);
  const auto block =
      static_cast<std::size_t>(colour) * slices + static_cast<std::size_t>(slice + guard_slices_);
  const auto at =
      block * static_cast<std::size_t>(max_rows_ + 2) + static_cast<std::size_t>(row + 1);
  return at * static_cast<std::size_t>(stride_) + kGuardColumns;
}

std::size_t IntensityLayout::row_number(int colour, int slice, int row) const {
  return (static_cast<std::size_t>(colour) * static_cast<std::size_t>(max_slices_) +
          static_cast<std::size_t>(slice)) *
             static_cast<std::size_t>(max_rows_) +
         static_cast<std::size_t>(row);
}

std::size_t IntensityLayout::rows() const {
  return row_number(colouring_.colours(), 0, 0);
}

IntensityBand IntensityLayout::band(int colour, int slice) const {
  const Colouring& c = colouring_;
  IntensityBand b;
  b.columns = columns_;
  b.rows = c.rows(colour);
  b.stride = stride_;
  b.pair_plane = static_cast<std::ptrdiff_t>(elements_);
  const RandomPlane& random = c.band(colour, slice).random;
  b.random.first_column = random.first_column;
  b.random.first_row = random.first_row;

  const auto place = [this](const Site& s) {
    return static_cast<std::ptrdiff_t>(element(s.colour, s.slice, s.row)) + s.column;
  };
  const Extent& e = c.extent();
  std::size_t t = 0;
  int plane_of_pair = 0;
  for (const NeighbourRing& ring : c.neighbourhood().rings) {
    b.ring_size[static_cast<std::size_t>(b.rings++)] = static_cast<int>(ring.neighbours.size());
    for (const Displacement& d : ring.neighbours) {
      IntensityNeighbour& n = b.neighbour[t++];
      n.weight = static_cast<float>(ring.weight);
      n.forward = looks_forward(d);
      for (std::size_t parity = 0; parity < 2; ++parity) {
        const int row = static_cast<int>(parity);
        const int first = c.first_x(colour, slice, row);
        // + 2 and + 4 keep neighbours at coordinates >= 0; places depend on parities alone.
        const int x = first + 2, y = c.y_of(colour, row) + 4, z = c.z_of(colour, slice) + 4;
        n.offset[parity] = place(c.site(x + d.x, y + d.y, z + d.z)) - place(c.site(x, y, z));
        // Columns j with 0 <= first + 2 j + d.x < width.
        n.begin[parity] = std::max(0, (-d.x - first + 1) >> 1);
        n.end[parity] = std::max(0, (std::min(e.width, e.width - d.x) - first + 1) >> 1);
      }
      const int z = c.z_of(colour, slice) + d.z;
      n.last_row = z < 0 || z >= e.depth ? 0 : b.rows;
      while (n.first_row < n.last_row && c.y_of(colour, n.first_row) + d.y < 0) ++n.first_row;
      while (n.last_row > n.first_row && c.y_of(colour, n.last_row - 1) + d.y >= e.height) {
        --n.last_row;
      }
      if (n.forward) n.pair_plane = plane_of_pair++;
    }
  }
  // The backward neighbour shares the plane of the opposite displacement, in the same ring.
  t = 0;
  for (const NeighbourRing& ring : c.neighbourhood().rings) {
    for (std::size_t i = 0; i < ring.neighbours.size(); ++i) {
      const Displacement& d = ring.neighbours[i];
      if (looks_forward(d)) continue;
      for (std::size_t k = 0; k < ring.neighbours.size(); ++k) {
        const Displacement& other = ring.neighbours[k];
        if (other.x == -d.x && other.y == -d.y && other.z == -d.z) {
          b.neighbour[t + i].pair_plane = b.neighbour[t + k].pair_plane;
        }
      }
    }
    t += ring.neighbours.size();
  }
  return b;
}

double IntensityLayout::total_weight(int x, int y, int z) const {
  const Extent& e = extent();
  double sum = 0.0;
  for (const NeighbourRing& ring : colouring_.neighbourhood().rings) {
    for (const Displacement& d : ring.neighbours) {
      const bool inside = x + d.x >= 0 && x + d.x < e.width && y + d.y >= 0 && y + d.y < e.height &&
                          z + d.z >= 0 && z + d.z < e.depth;
      if (inside) sum += ring.weight;
    }
  }
  return sum;
}

void IntensityLayout::scatter(View<const float> image, AlignedBuffer<float>& plane) const {
  for_each_pixel([&](std::size_t at, int x, int y, int z) { plane[at] = image.at(x, y, z); });
}

void IntensityLayout::gather(const AlignedBuffer<float>& plane, View<float> image) const {
  for_each_pixel([&](std::size_t at, int x, int y, int z) { image.at(x, y, z) = plane[at]; });
}

}  // namespace stillfield
