#include "sampler/label_chain.h"

#include <algorithm>

namespace stillfield {

ObservedField observe(const Colouring& c, const GreyLevels& grey) {
  ObservedField field{&c, &grey, AlignedBuffer<std::uint16_t>(c.plane_elements())};
  std::fill(field.level.begin(), field.level.end(), grey.missing());
  for (int colour = 0; colour < c.colours(); ++colour) {
    for (int slice = 0; slice < c.slices(colour); ++slice) {
      for (int row = 0; row < c.rows(colour); ++row) {
        std::uint16_t* out = field.level.data() + c.plane_row(colour, slice, row);
        const std::uint16_t* in = grey.level.row(c.y_of(colour, row), c.z_of(colour, slice));
        const int first = c.first_x(colour, slice, row);
        for (int j = 0; j < c.sites(colour, slice, row); ++j) out[j] = in[first + 2 * j];
      }
    }
  }
  return field;
}

double LabelTotals::weighted_pairs(const Neighbourhood& neighbourhood) const {
  double sum = 0.0;
  for (std::size_t r = 0; r < equal_pairs.size(); ++r) {
    sum += neighbourhood.rings[r].weight * static_cast<double>(equal_pairs[r]);
  }
  return sum;
}

}  // namespace stillfield
