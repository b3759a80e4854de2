// A smooth surface over an image: uneven light.
//
// Maths    g(x, y) = sum_ij c_ij B_i(x) B_j(y), uniform cubic B-splines (de Boor 1978) whose first
//          and last knot interval begin and end at the centres of the outer pixels; the B_i sum to
//          one, so that c = 1 is even light
// Frame    mean_ij = average of B_i B_j over all pixels: the mean of g is the inner product of
//          mean and c
// Shapes   side x side coefficients, side 4..kMostSurfaceSide, row by row (j major). All slices of
//          a volume share the surface
#ifndef STILLFIELD_MODEL_SPLINE_SURFACE_H_
#define STILLFIELD_MODEL_SPLINE_SURFACE_H_

#include <array>
#include <vector>

#include "core/volume.h"

namespace stillfield {

inline constexpr int kLeastSurfaceSide = 4;
inline constexpr int kMostSurfaceSide = 12;

// Of each pixel along an axis: the first of its four splines, and their values.
struct SplineAxis {
  int splines = 0;
  std::vector<int> first;
  std::vector<std::array<double, 4>> value;
};

struct SurfaceBasis {
  Extent extent;
  int side = 0;
  SplineAxis x, y;
  std::vector<double> mean;

  int unknowns() const { return side * side; }
};

SurfaceBasis make_surface_basis(const Extent& extent, int side);

// The surface along one row of pixels.
class SurfaceRow {
 public:
  SurfaceRow(const SurfaceBasis& basis, const std::vector<double>& coefficients, int y);
  double at(int x) const {
    const auto i = static_cast<std::size_t>(x);
    const std::array<double, 4>& b = axis_->value[i];
    const double* c = along_.data() + axis_->first[i];
    return b[0] * c[0] + b[1] * c[1] + b[2] * c[2] + b[3] * c[3];
  }

 private:
  const SplineAxis* axis_;
  std::array<double, kMostSurfaceSide> along_{};
};

// One slice.
Volume<float> surface_plane(const SurfaceBasis& basis, const std::vector<double>& coefficients);

}  // namespace stillfield

#endif  // STILLFIELD_MODEL_SPLINE_SURFACE_H_
