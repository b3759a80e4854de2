// Colour-split layout of a pixel grid.
//
// Pixels of one colour have no neighbours among themselves, so a whole colour can be updated at
// once without changing the distribution (Besag 1974: coding sets). Each colour is stored apart:
//
//   neighbours  colours  colour                       column  row   slice
//   4, 6        2        (x + y + z) & 1              x >> 1  y     z
//   8           4        x & 1 | (y & 1) << 1         x >> 1  y>>1  z
//   26          8        ... | (z & 1) << 2           x >> 1  y>>1  z >> 1
//
// with global x, y, z. Within a row the labels are ordered for the kernels (simd/label_band.h);
// planes of other data (grey levels, weights) are in image order, 4 Q elements a row.
#ifndef STILLFIELD_SAMPLER_COLOURING_H_
#define STILLFIELD_SAMPLER_COLOURING_H_

#include <cstddef>
#include <cstdint>
#include <vector>

#include "core/aligned_buffer.h"
#include "core/extent.h"
#include "core/volume.h"
#include "model/neighbourhood.h"
#include "simd/label_band.h"

namespace stillfield {

// Where a pixel lives.
struct Site {
  int colour, slice, row, column;
};

class Colouring {
 public:
  // `offset` is the grid's position in a larger one; x, y and z must be multiples of 4.
  Colouring(Extent extent, const Neighbourhood& neighbourhood, Offset offset = {});

  const Extent& extent() const { return extent_; }
  const Neighbourhood& neighbourhood() const { return neighbourhood_; }
  int colours() const { return colours_; }
  bool volume() const { return guard_slices_ > 0; }  // neighbours in other slices
  int words() const { return words_; }               // Q
  int slices(int colour) const;
  int rows(int colour) const;
  int sites(int colour, int slice, int row) const;

  Site site(int x, int y, int z) const;
  // First x of a row of one colour; later columns follow at steps of 2.
  int first_x(int colour, int slice, int row) const;
  int y_of(int colour, int row) const;
  int z_of(int colour, int slice) const;
  // Slice number that random words are counted by: that of the whole grid.
  std::uint32_t random_slice(int slice) const;

  // Label storage: bytes in all, and the byte of word 0 of a row. Rows -1 and rows() are guards.
  std::size_t label_bytes() const { return label_bytes_; }
  std::size_t label_row(int colour, int slice, int row) const;
  std::ptrdiff_t label_stride() const { return label_stride_; }
  // Place of a column within a label row.
  std::size_t byte_of(int column) const {
    return static_cast<std::size_t>(4 * (column % words_) + column / words_);
  }

  // Storage of one plane of elements, 4 Q a row: elements in all, and the first of a row.
  std::size_t plane_elements() const { return plane_elements_; }
  std::size_t plane_row(int colour, int slice, int row) const;
  std::ptrdiff_t plane_stride() const { return std::ptrdiff_t{4} * words_; }

  // Geometry of one slice of a colour: rings (without tables), sites, strides, random plane.
  // Pointers, classes, tables, key and sweep are left for the caller.
  LabelBand band(int colour, int slice) const;

 private:
  bool by_blocks() const;

  Extent extent_;
  Offset offset_;
  Neighbourhood neighbourhood_;
  int colours_ = 2;
  int words_ = 0;
  int max_rows_ = 0;
  int max_slices_ = 0;
  int guard_slices_ = 0;
  std::ptrdiff_t label_stride_ = 0;
  std::size_t label_bytes_ = 0;
  std::size_t plane_elements_ = 0;
};

// Label buffer with every byte a guard.
AlignedBuffer<std::uint8_t> guarded_labels(const Colouring& colouring);

// Copies labels between image order and the split layout.
void scatter_labels(const Colouring& colouring, View<const std::uint8_t> image,
                    AlignedBuffer<std::uint8_t>& labels);
void gather_labels(const Colouring& colouring, const AlignedBuffer<std::uint8_t>& labels,
                   View<std::uint8_t> image);

}  // namespace stillfield

#endif  // STILLFIELD_SAMPLER_COLOURING_H_
