// Are the pixels along borders mixtures of the two classes that meet there?
//
// Six pixels in a row or column, three of class a and then three of class b, make a straight
// border. The two in the middle are compared with the other side:
//   pull = sum d (y - own mean) / own sd^2 / sum d^2 / own sd^2,  d = other mean - own mean
//   (the least-squares share of the other class in a border pixel)
// 0 without mixing; P(Z < -1/2 / s) for optics that blur by a Gaussian of s pixels (0.16 at s = 0.5,
// 0.31 at s = 1).
// Seen are borders at least three pixels from the rims of blocks.
// NaN      without such a border
#ifndef STILLFIELD_DIAGNOSE_BORDER_PULL_H_
#define STILLFIELD_DIAGNOSE_BORDER_PULL_H_

#include "diagnose/residual_block.h"

namespace stillfield {

class BorderPull {
 public:
  void add(const ResidualBlock& block, const GaussianClasses& classes);
  double pull() const { return along_ / square_; }
  std::int64_t pixels() const { return pixels_; }

 private:
  void look(const ResidualBlock& block, const GaussianClasses& classes, std::size_t first,
            std::size_t step);

  double along_ = 0, square_ = 0;
  std::int64_t pixels_ = 0;
};

}  // namespace stillfield

#endif  // STILLFIELD_DIAGNOSE_BORDER_PULL_H_
