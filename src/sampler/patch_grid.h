// Grids of patch positions with a random offset that cover every pixel.
#ifndef STILLFIELD_SAMPLER_PATCH_GRID_H_
#define STILLFIELD_SAMPLER_PATCH_GRID_H_

#include <vector>

namespace stillfield {

// First pixels of patches of `side` along an axis of `length` >= side pixels: every offset +
// i * step that fits, with one patch at either end where the regular ones leave pixels uncovered.
// 0 <= offset < step <= side. Ascending.
std::vector<int> covering_positions(int length, int side, int step, int offset);

}  // namespace stillfield

#endif  // STILLFIELD_SAMPLER_PATCH_GRID_H_
