// What the label kernels eat: a band of rows of one colour, laid out for them.
//
// Label row   4 Q sites in Q 32-bit words, Q a multiple of 16: byte b of word i is site b Q + i.
//             A word then holds four sites that are far apart, so that "the sites of byte b" of a
//             vector of words are neighbours in the image: weights and random numbers are read in
//             image order, four streams a row, and no lane is ever unpacked. The site to the right
//             of site s is one word further; the guard words before word 0 and after word Q - 1
//             continue each quarter with the first or last site of the next.
// Guards      sites outside the image hold kGuardLabel: no class has it, its low bits are zero.
// Weights     float rows of 4 Q sites in image order, one plane a class (one in all for 2 labels).
// Counts      byte rows in the order of label rows; one plane for each class above the first.
//
// Coupling: ring r holds the neighbours of one distance; n equal neighbours in it multiply the
// weight of a label by table[n] = exp(beta w_r n).
#ifndef STILLFIELD_SIMD_LABEL_BAND_H_
#define STILLFIELD_SIMD_LABEL_BAND_H_

#include <array>
#include <cstddef>
#include <cstdint>

#include "simd/random_rows.h"

namespace stillfield {

inline constexpr std::uint8_t kGuardLabel = 0x80;
inline constexpr int kMaxLabels = 64;
inline constexpr int kMaxRings = 5;  // faces, edges, corners, with unequal spacing along z
inline constexpr int kMaxRingNeighbours = 12;
inline constexpr int kRowQuantum = 16;  // Q is a multiple of this

struct Ring {
  int neighbours = 0;
  // Bytes from a site's word to the word of its neighbour, for even and odd rows.
  std::array<std::array<std::ptrdiff_t, kMaxRingNeighbours>, 2> offset{};
  std::array<float, 16> table{};
};

struct LabelBand {
  int classes = 2;
  int words = 0;               // Q
  std::array<int, 2> sites{};  // sites inside the image in even and odd rows, <= 4 Q
  int first_row = 0;           // even
  int rows = 0;

  std::uint8_t* labels = nullptr;    // word 0 of row 0 of this colour (not of first_row)
  std::ptrdiff_t label_stride = 0;   // bytes from row to row
  const float* weights = nullptr;    // site 0 of row 0 of class 0
  std::ptrdiff_t weight_stride = 0;  // floats from row to row
  std::ptrdiff_t weight_plane = 0;   // floats from class to class
  std::uint8_t* counts = nullptr;    // byte 0 of row 0 of class 1; null: do not count
  std::ptrdiff_t count_stride = 0;
  std::ptrdiff_t count_plane = 0;

  int ring_count = 0;
  std::array<Ring, kMaxRings> rings{};
  RandomPlane random{};
};

// One Gibbs update of every site of the band, rows first_row .. first_row + rows - 1.
//
// two_label_rows   label 1 iff u (1 + E prod_r table_r[n_r]) < 1, n_r = ring neighbours with label
//                  1, E = weights = ratio of label 0 to label 1 at n_r = 0 (any border correction
//                  included), u the site's uniform (24 bits). E <= 1e30.
// label_rows       label = number of k < K - 1 with c_k <= u c_{K-1}, where c_k is the running sum
//                  of weights_k prod_r table_r[n_rk], in class order.
// Counts (if any) grow by one where a site takes the class; the caller empties them in time.
void two_label_rows(const LabelBand& band);
void label_rows(const LabelBand& band);

}  // namespace stillfield

#endif  // STILLFIELD_SIMD_LABEL_BAND_H_
