// The program's label kernels on a torus.
//
// The program has free boundaries. Here the guard sites around each colour's rows are overwritten
// with the labels of the opposite side before every update, and the weights are 1 everywhere (no
// border correction): two_label_rows and label_rows then sweep a torus. 4 neighbours, even side, so
// that colours match across the seam.
#ifndef STILLFIELD_TESTS_EXACTNESS_TORUS_H_
#define STILLFIELD_TESTS_EXACTNESS_TORUS_H_

#include <cstdint>

#include "core/volume.h"
#include "sampler/colouring.h"

namespace stillfield::exactness {

class Torus {
 public:
  // Starts from independent uniform labels, or from all zero.
  Torus(int side, int classes, double beta, std::uint64_t seed, bool ordered_start = false);

  void sweep(int sweeps);

  // Share of the 2 side^2 neighbour pairs with equal labels.
  double equal_fraction();

 private:
  void close_seam(int colour);

  int side_;
  int classes_;
  double beta_;
  PhiloxKey key_;
  std::uint32_t sweeps_done_ = 0;
  Colouring colouring_;
  AlignedBuffer<std::uint8_t> labels_;
  AlignedBuffer<float> weights_;
  Volume<std::uint8_t> image_;
};

}  // namespace stillfield::exactness

#endif  // STILLFIELD_TESTS_EXACTNESS_TORUS_H_
