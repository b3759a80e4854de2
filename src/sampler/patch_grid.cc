#include "sampler/patch_grid.h"

namespace stillfield {

std::vector<int> covering_positions(int length, int side, int step, int offset) {
  const int last = length - side;
  std::vector<int> positions;
  if (offset > 0) positions.push_back(0);
  for (int p = offset; p <= last; p += step) positions.push_back(p);
  if (positions.empty() || positions.back() < last) positions.push_back(last);
  return positions;
}

}  // namespace stillfield
