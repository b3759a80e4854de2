#include "measure/intensity_scores.h"

#include <algorithm>
#include <cmath>
#include <limits>
#include <opencv2/imgproc.hpp>
#include <vector>

namespace stillfield {
namespace {

constexpr double kNan = std::numeric_limits<double>::quiet_NaN();
constexpr double kWindowSd = 1.5;
constexpr int kWindowRadius = 5;  // 3.5 standard deviations, rounded
constexpr double kEdgeShare = 0.1;

cv::Mat as_mat(View<const float> plane) {
  cv::Mat mat(plane.height(), plane.width(), CV_64FC1);
  for (int y = 0; y < plane.height(); ++y) {
    std::copy_n(plane.row(y), plane.width(), mat.ptr<double>(y));
  }
  return mat;
}

cv::Mat smoothed(const cv::Mat& image) {
  cv::Mat out;
  const int side = 2 * kWindowRadius + 1;
  cv::GaussianBlur(image, out, {side, side}, kWindowSd, kWindowSd, cv::BORDER_REFLECT);
  return out;
}

// Gradient magnitudes of the truth; NaN spreads to its neighbours.
cv::Mat gradient(View<const float> truth) {
  const cv::Mat image = as_mat(truth);
  cv::Mat gx, gy, magnitude;
  cv::Sobel(image, gx, CV_64F, 1, 0);
  cv::Sobel(image, gy, CV_64F, 0, 1);
  cv::magnitude(gx, gy, magnitude);
  return magnitude;
}

// The smallest gradient of the strongest tenth.
double edge_limit(const cv::Mat& magnitude) {
  std::vector<double> all;
  for (int y = 0; y < magnitude.rows; ++y) {
    const double* row = magnitude.ptr<double>(y);
    std::copy_if(row, row + magnitude.cols, std::back_inserter(all),
                 [](double g) { return std::isfinite(g); });
  }
  if (all.empty()) return kNan;
  const auto at = static_cast<std::ptrdiff_t>((1 - kEdgeShare) * static_cast<double>(all.size()));
  std::nth_element(all.begin(), all.begin() + at, all.end());
  return all[static_cast<std::size_t>(at)];
}

}  // namespace

double structural_similarity(View<const float> a, View<const float> b, double peak) {
  const int border = kWindowRadius;
  if (a.width() <= 2 * border || a.height() <= 2 * border) return kNan;
  const cv::Mat x = as_mat(a), y = as_mat(b);
  const cv::Mat mx = smoothed(x), my = smoothed(y);
  const cv::Mat xx = smoothed(x.mul(x)), yy = smoothed(y.mul(y)), xy = smoothed(x.mul(y));
  const double c1 = std::pow(0.01 * peak, 2), c2 = std::pow(0.03 * peak, 2);
  double sum = 0;
  for (int r = border; r < a.height() - border; ++r) {
    for (int c = border; c < a.width() - border; ++c) {
      const double ux = mx.at<double>(r, c), uy = my.at<double>(r, c);
      const double vx = xx.at<double>(r, c) - ux * ux, vy = yy.at<double>(r, c) - uy * uy;
      const double vxy = xy.at<double>(r, c) - ux * uy;
      sum += (2 * ux * uy + c1) * (2 * vxy + c2) / ((ux * ux + uy * uy + c1) * (vx + vy + c2));
    }
  }
  return sum / (static_cast<double>(a.width() - 2 * border) * (a.height() - 2 * border));
}

IntensityScores score_intensities(View<const float> restored, View<const float> lower90,
                                  View<const float> upper90, View<const float> truth, double peak) {
  IntensityScores s;
  const cv::Mat magnitude = gradient(truth);
  const double limit = edge_limit(magnitude);
  double squares = 0;
  std::int64_t inside = 0, edges = 0, inside_edges = 0;
  for (int y = 0; y < truth.height(); ++y) {
    const double* steep = magnitude.ptr<double>(y);
    for (int x = 0; x < truth.width(); ++x) {
      const double t = truth.at(x, y);
      if (std::isnan(t)) continue;
      ++s.pixels;
      const double e = restored.at(x, y) - t;
      squares += e * e;
      s.mean_error += e;
      s.mean_width90 += double{upper90.at(x, y)} - lower90.at(x, y);
      const bool covered = lower90.at(x, y) <= t && t <= upper90.at(x, y);
      inside += covered;
      if (!(steep[x] >= limit)) continue;
      ++edges;
      inside_edges += covered;
    }
  }
  const auto n = static_cast<double>(s.pixels);
  if (s.pixels == 0) {
    s.rmse = s.mean_error = s.psnr = s.ssim = s.coverage90 = s.coverage90_at_edges =
        s.mean_width90 = kNan;
    return s;
  }
  s.rmse = std::sqrt(squares / n);
  s.mean_error /= n;
  s.mean_width90 /= n;
  s.psnr = 20 * std::log10(peak / s.rmse);
  s.coverage90 = static_cast<double>(inside) / n;
  s.coverage90_at_edges =
      edges > 0 ? static_cast<double>(inside_edges) / static_cast<double>(edges) : kNan;
  s.ssim = structural_similarity(restored, truth, peak);
  return s;
}

}  // namespace stillfield
