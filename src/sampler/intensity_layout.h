// Where the pixels of an intensity field lie: the colours of sampler/colouring.h as float planes.
//
// Storage  element(colour, slice, row) + column; the row's columns() elements are followed by
//          guards, as are the rows before the first and after the last, and in volumes the slices.
//          Guards are zero and the columns beyond the image too.
// Units    elements are floats in the image's grey unit
#ifndef STILLFIELD_SAMPLER_INTENSITY_LAYOUT_H_
#define STILLFIELD_SAMPLER_INTENSITY_LAYOUT_H_

#include "core/aligned_buffer.h"
#include "core/volume.h"
#include "sampler/colouring.h"
#include "simd/intensity_band.h"

namespace stillfield {

class IntensityLayout {
 public:
  // As Colouring.
  IntensityLayout(Extent extent, const Neighbourhood& neighbourhood, Offset offset = {});

  const Colouring& colouring() const { return colouring_; }
  const Extent& extent() const { return colouring_.extent(); }
  std::size_t elements() const { return elements_; }  // of one plane
  std::size_t element(int colour, int slice, int row) const;
  int columns() const { return columns_; }
  std::ptrdiff_t stride() const { return stride_; }
  int pair_planes() const { return pair_planes_; }  // pairs a pixel owns
  std::int64_t pairs() const { return pairs_; }     // in the whole field

  // Number of a row among all rows of all colours; rows() in all.
  std::size_t row_number(int colour, int slice, int row) const;
  std::size_t rows() const;

  // Geometry of one slice of a colour: neighbours, strides, random plane. Pointers, parameters,
  // key and sweep are left for the caller.
  IntensityBand band(int colour, int slice) const;

  // Sum of the weights of the neighbours of a pixel that lie inside the image.
  double total_weight(int x, int y, int z) const;

  // Copies between image order and the layout. `scatter` leaves what is not a pixel as it is.
  void scatter(View<const float> image, AlignedBuffer<float>& plane) const;
  void gather(const AlignedBuffer<float>& plane, View<float> image) const;

  // Calls body(element, x, y, z) for every pixel, in the order of the layout.
  template <class Body>
  void for_each_pixel(const Body& body) const {
    for (int colour = 0; colour < colouring_.colours(); ++colour) {
      for (int slice = 0; slice < colouring_.slices(colour); ++slice) {
        for (int row = 0; row < colouring_.rows(colour); ++row) {
          const std::size_t start = element(colour, slice, row);
          const int first = colouring_.first_x(colour, slice, row);
          const int y = colouring_.y_of(colour, row);
          const int z = colouring_.z_of(colour, slice);
          for (int j = 0; j < colouring_.sites(colour, slice, row); ++j) {
            body(start + static_cast<std::size_t>(j), first + 2 * j, y, z);
          }
        }
      }
    }
  }

 private:
  Colouring colouring_;
  Offset offset_;
  int columns_ = 0;
  int max_rows_ = 0;
  int max_slices_ = 0;
  int guard_slices_ = 0;
  int pair_planes_ = 0;
  std::int64_t pairs_ = 0;
  std::ptrdiff_t stride_ = 0;
  std::size_t elements_ = 0;
};

}  // namespace stillfield

#endif  // STILLFIELD_SAMPLER_INTENSITY_LAYOUT_H_
