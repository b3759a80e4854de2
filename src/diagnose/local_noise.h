// Level and correlation of the noise, from residuals within blocks.
//
// A cell is the inner pixels of one class in one block, at least kFewestCellPixels of them; its
// mean is taken off first, so that slow shading counts for neither.
//   spread        sum n (v - 1)^2 / sum n over cells, v the variance of a cell's n residuals:
//                 2 / (n - 1) for noise of one level, plus the square of the relative variation of
//                 the noise variance from place to place (or between classes, when they share one)
//   along x, y    Moran's I of horizontal and vertical neighbours of the same cell
//                 [Moran 1950, Biometrika 37, 17-23]:
//                 (sum over pairs e_s e_t / pairs) / (sum e^2 / pixels)
// NaN      without a cell
#ifndef STILLFIELD_DIAGNOSE_LOCAL_NOISE_H_
#define STILLFIELD_DIAGNOSE_LOCAL_NOISE_H_

#include "diagnose/residual_block.h"

namespace stillfield {

inline constexpr int kFewestCellPixels = 32;

class LocalNoise {
 public:
  explicit LocalNoise(int classes);
  void add(const ResidualBlock& block);

  double spread() const;
  double along_x() const { return correlation(product_x_, pairs_x_); }
  double along_y() const { return correlation(product_y_, pairs_y_); }

 private:
  double correlation(double product, double pairs) const;

  struct Cell {
    int pixels = 0;
    double sum = 0, square = 0;
  };
  std::vector<Cell> cells_;  // of the block in hand, one a class
  double pixels_ = 0, square_ = 0, departure_ = 0;
  double product_x_ = 0, pairs_x_ = 0, product_y_ = 0, pairs_y_ = 0;
};

}  // namespace stillfield

#endif  // STILLFIELD_DIAGNOSE_LOCAL_NOISE_H_
