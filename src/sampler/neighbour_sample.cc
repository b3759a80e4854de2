#include "sampler/neighbour_sample.h"

#include <algorithm>
#include <cmath>

namespace stillfield {

void sample_neighbours(const Colouring& c, const LabelChain& chain, int wanted, double phase,
                       NeighbourCounts& counts) {
  const int classes = chain.model.size();
  counts.classes = classes;
  const auto sites = static_cast<double>(c.extent().sites());
  // Every `stride`-th pixel of the colours' rows laid end to end.
  const double stride = std::max(1.0, sites / wanted);
  const auto most = counts.label.size() + static_cast<std::size_t>(sites / stride) + 1;
  counts.label.reserve(most);
  counts.count.reserve(most * static_cast<std::size_t>(classes));
  double next = phase * stride;
  double begin = 0.0;  // running number of the current row's first pixel
  for (int colour = 0; colour < c.colours(); ++colour) {
    for (int slice = 0; slice < c.slices(colour); ++slice) {
      const LabelBand band = c.band(colour, slice);
      for (int row = 0; row < c.rows(colour); ++row) {
        const auto parity = static_cast<std::size_t>(row & 1);
        const int n = band.sites[parity];
        const std::uint8_t* labels = chain.labels.data() + c.label_row(colour, slice, row);
        for (; next < begin + n; next += stride) {
          const std::uint8_t* at = labels + c.byte_of(static_cast<int>(next - begin));
          counts.label.push_back(*at);
          const std::size_t first = counts.count.size();
          counts.count.resize(first + static_cast<std::size_t>(classes), 0.0f);
          for (int r = 0; r < band.ring_count; ++r) {
            const Ring& ring = band.rings[static_cast<std::size_t>(r)];
            const auto weight =
                static_cast<float>(c.neighbourhood().rings[static_cast<std::size_t>(r)].weight);
            for (int t = 0; t < ring.neighbours; ++t) {
              const std::uint8_t k = at[ring.offset[parity][static_cast<std::size_t>(t)]];
              if (k < classes) counts.count[first + k] += weight;
            }
          }
        }
        begin += n;
      }
    }
  }
}

}  // namespace stillfield
