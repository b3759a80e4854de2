#include "model/spline_surface.h"

#include <algorithm>

namespace stillfield {
namespace {

SplineAxis make_axis(int pixels, int splines) {
  SplineAxis axis;
  axis.splines = splines;
  const int intervals = splines - 3;
  for (int i = 0; i < pixels; ++i) {
    const double t = pixels > 1 ? static_cast<double>(i) * intervals / (pixels - 1) : 0.0;
    const int first = std::min(static_cast<int>(t), intervals - 1);
    const double u = t - first;
    const double v = 1.0 - u;
    axis.first.push_back(first);
    axis.value.push_back({v * v * v / 6.0, (3.0 * u * u * u - 6.0 * u * u + 4.0) / 6.0,
                          (3.0 * v * v * v - 6.0 * v * v + 4.0) / 6.0, u * u * u / 6.0});
  }
  return axis;
}

std::vector<double> mean_of(const SplineAxis& axis) {
  std::vector<double> mean(static_cast<std::size_t>(axis.splines));
  for (std::size_t i = 0; i < axis.first.size(); ++i) {
    for (std::size_t b = 0; b < 4; ++b) {
      mean[static_cast<std::size_t>(axis.first[i]) + b] += axis.value[i][b];
    }
  }
  for (double& m : mean) m /= static_cast<double>(axis.first.size());
  return mean;
}

}  // namespace

SurfaceBasis make_surface_basis(const Extent& extent, int side) {
  SurfaceBasis basis;
  basis.extent = extent;
  basis.side = side;
  basis.x = make_axis(extent.width, side);
  basis.y = make_axis(extent.height, side);
  const std::vector<double> along_x = mean_of(basis.x), along_y = mean_of(basis.y);
  for (const double my : along_y) {
    for (const double mx : along_x) basis.mean.push_back(mx * my);
  }
  return basis;
}

SurfaceRow::SurfaceRow(const SurfaceBasis& basis, const std::vector<double>& coefficients, int y)
    : axis_(&basis.x) {
  const auto row = static_cast<std::size_t>(y);
  const auto side = static_cast<std::size_t>(basis.side);
  for (std::size_t b = 0; b < 4; ++b) {
    const std::size_t j = static_cast<std::size_t>(basis.y.first[row]) + b;
    for (std::size_t i = 0; i < side; ++i) {
      along_[i] += basis.y.value[row][b] * coefficients[j * side + i];
    }
  }
}

Volume<float> surface_plane(const SurfaceBasis& basis, const std::vector<double>& coefficients) {
  Volume<float> plane({basis.extent.width, basis.extent.height});
  for (int y = 0; y < plane.height(); ++y) {
    const SurfaceRow row(basis, coefficients, y);
    for (int x = 0; x < plane.width(); ++x) plane.at(x, y) = static_cast<float>(row.at(x));
  }
  return plane;
}

}  // namespace stillfield
