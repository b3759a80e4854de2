#include "model/blur.h"

#include <algorithm>
#include <cmath>
#include <string>

#include "core/elementary.h"
#include "core/error.h"

namespace stillfield {

std::vector<double> BlurKernel::inside(int size) const {
  std::vector<double> n(static_cast<std::size_t>(size), 0.0);
  for (int x = 0; x < size; ++x) {
    for (int i = std::max(-radius, -x); i <= std::min(radius, size - 1 - x); ++i) {
      n[static_cast<std::size_t>(x)] += value[static_cast<std::size_t>(radius + i)];
    }
  }
  return n;
}

BlurKernel make_blur_kernel(double sd) {
  if (!(sd >= kSmallestBlur && sd <= kLargestBlur)) {
    throw Error(ErrorKind::kUsage,
                "a blur of " + std::to_string(sd) + " pixels cannot be modelled; give 0.2 to 3");
  }
  BlurKernel kernel{sd, static_cast<int>(std::ceil(2.5 * sd)), {}};
  double total = 0.0;
  for (int i = -kernel.radius; i <= kernel.radius; ++i) {
    kernel.value.push_back(exact_exp(-0.5 * i * i / (sd * sd)));
    total += kernel.value.back();
  }
  for (double& v : kernel.value) v /= total;
  return kernel;
}

}  // namespace stillfield
