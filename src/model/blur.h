// The optics' point-spread function: a separable discrete Gaussian.
//
// Kernel   h(i) prop. to exp(-i^2 / (2 b^2)), i = -R..R, R = ceil(2.5 b), sums to 1; b = standard
//          deviation in pixels (Gaussian approximation of a microscope's point-spread function:
//          Zhang, Zerubia & Olivo-Marin 2007)
// Border   outside the image nothing is known: the kernel is cut off and renormalised there. With
//          n(t) the sum of h over the pixels inside, (h * m)(t) = 1/n(t) sum_s h(t - s) m(s), and
//          n(t) = n_x(x) n_y(y)
#ifndef STILLFIELD_MODEL_BLUR_H_
#define STILLFIELD_MODEL_BLUR_H_

#include <vector>

namespace stillfield {

inline constexpr double kSmallestBlur = 0.2;  // px; the kernel then is one pixel but for 4e-6
inline constexpr double kLargestBlur = 3.0;
inline constexpr int kLargestBlurRadius = 8;

struct BlurKernel {
  double sd = 0.0;            // b
  int radius = 0;             // R
  std::vector<double> value;  // h(-R) .. h(R)

  // n(x) for x = 0 .. size - 1.
  std::vector<double> inside(int size) const;
};

// Throws Error(kUsage) unless kSmallestBlur <= sd <= kLargestBlur.
BlurKernel make_blur_kernel(double sd);

}  // namespace stillfield

#endif  // STILLFIELD_MODEL_BLUR_H_
