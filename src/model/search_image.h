// An image made small for searches that run many times over it.
//
// Levels   at most kSearchLevels; an image with more is rounded to that many between its 0.1 % and
//          99.9 % quantiles, widened by half their distance on either side, and clipped there:
//          the step is at most 1/256 of what nearly all pixels span
// Size     above kSearchTiles^2 tiles of kSearchTile^2 pixels, that many tiles at even distances,
//          side by side with one missing pixel between them, so that they do not agree across
//          seams
#ifndef STILLFIELD_MODEL_SEARCH_IMAGE_H_
#define STILLFIELD_MODEL_SEARCH_IMAGE_H_

#include "model/grey_levels.h"

namespace stillfield {

inline constexpr int kSearchLevels = 512;
inline constexpr int kSearchTile = 256;
inline constexpr int kSearchTiles = 4;  // a row and a column of them

GreyLevels make_search_image(const GreyLevels& grey);

}  // namespace stillfield

#endif  // STILLFIELD_MODEL_SEARCH_IMAGE_H_
