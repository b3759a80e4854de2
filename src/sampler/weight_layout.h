// Where the weight planes of the label kernels lie, and what two-label weights need at the border.
//
// Layout   weights of a row: its planes one after the other, so that a row pair is one piece of
//          memory. Long planes get a tail that keeps them from competing for the same cache lines,
//          as pieces at multiples of 2048 bytes do
#ifndef STILLFIELD_SAMPLER_WEIGHT_LAYOUT_H_
#define STILLFIELD_SAMPLER_WEIGHT_LAYOUT_H_

#include <cstddef>

#include "sampler/label_chain.h"

namespace stillfield {

// Elements from one plane of a row to the next.
std::ptrdiff_t weight_plane(const Colouring& colouring);

// First element of a row.
std::ptrdiff_t weight_row(const Colouring& colouring, int planes, int colour, int slice, int row);

// Room for all rows of `weights.table.planes` planes.
void make_room_for_weights(const Colouring& colouring, WeightPlanes& weights);

// Label 0 has fewer neighbours at the border than the two-label kernel's table assumes: the ratios
// of a row are corrected by exp(-beta * missing weight).
void correct_border(const Colouring& colouring, double beta, int colour, int slice, int row,
                    float* weights);

}  // namespace stillfield

#endif  // STILLFIELD_SAMPLER_WEIGHT_LAYOUT_H_
