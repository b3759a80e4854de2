#include "sampler/weight_layout.h"

#include "core/elementary.h"

namespace stillfield {
namespace {

// Of the neighbours that lie outside the grid.
double missing_weight(const Colouring& c, int x, int y, int z) {
  const Extent& e = c.extent();
  double sum = 0.0;
  for (const NeighbourRing& ring : c.neighbourhood().rings) {
    int missing = 0;
    for (const Displacement& d : ring.neighbours) {
      missing += x + d.x < 0 || x + d.x >= e.width || y + d.y < 0 || y + d.y >= e.height ||
                 z + d.z < 0 || z + d.z >= e.depth;
    }
    sum += ring.weight * missing;
  }
  return sum;
}

}  // namespace

std::ptrdiff_t weight_plane(const Colouring& c) {
  return c.plane_stride() + (c.plane_stride() % 512 == 0 ? 80 : 0);
}

std::ptrdiff_t weight_row(const Colouring& c, int planes, int colour, int slice, int row) {
  const auto rows = static_cast<std::ptrdiff_t>(c.plane_row(colour, slice, row)) / c.plane_stride();
  return rows * planes * weight_plane(c);
}

void make_room_for_weights(const Colouring& c, WeightPlanes& weights) {
  const auto rows = static_cast<std::ptrdiff_t>(c.plane_elements()) / c.plane_stride();
  const auto wanted = static_cast<std::size_t>(rows * weights.table.planes * weight_plane(c));
  if (weights.value.size() != wanted) weights.value = AlignedBuffer<float>(wanted);
}

void correct_border(const Colouring& c, double beta, int colour, int slice, int row,
                    float* weights) {
  const int y = c.y_of(colour, row);
  const int z = c.z_of(colour, slice);
  const int first = c.first_x(colour, slice, row);
  const int sites = c.sites(colour, slice, row);
  const Extent& e = c.extent();
  const auto correct = [&](int j) {
    const double missing = missing_weight(c, first + 2 * j, y, z);
    if (missing > 0.0) weights[j] *= static_cast<float>(exact_exp(-beta * missing));
  };
  const bool edge_row = y == 0 || y == e.height - 1;
  const bool edge_slice = c.volume() && (z == 0 || z == e.depth - 1);
  if (edge_row || edge_slice) {
    for (int j = 0; j < sites; ++j) correct(j);
  } else if (sites > 0) {
    correct(0);
    if (sites > 1) correct(sites - 1);
  }
}

}  // namespace stillfield
