#include "diagnose/fourier.h"

#include <cmath>

namespace stillfield {

FourierTransform::FourierTransform(std::size_t length) : roots_(length / 2) {
  roots_.re[0] = 1;
  // From a quarter turn at k = N/4 down: halving the angle fills the odd multiples of each step.
  double re = 0;
  double im = -1;
  for (std::size_t step = length / 4; step > 0; step /= 2) {
    for (std::size_t k = 0; k < roots_.size(); k += 2 * step) {
      roots_.re[k + step] = roots_.re[k] * re - roots_.im[k] * im;
      roots_.im[k + step] = roots_.re[k] * im + roots_.im[k] * re;
    }
    const double cosine = std::sqrt(0.5 * (1 + re));
    im = im / (2 * cosine);
    re = cosine;
  }
}

void FourierTransform::forward(ComplexSignal& z) const {
  for (std::size_t half = z.size() / 2; half > 0; half /= 2) {
    const std::size_t stride = z.size() / (2 * half);
    for (std::size_t block = 0; block < z.size(); block += 2 * half) {
      for (std::size_t j = 0; j < half; ++j) {
        const std::size_t a = block + j;
        const std::size_t b = a + half;
        const double root_re = roots_.re[j * stride];
        const double root_im = roots_.im[j * stride];
        const double re = z.re[a] - z.re[b];
        const double im = z.im[a] - z.im[b];
        z.re[a] += z.re[b];
        z.im[a] += z.im[b];
        z.re[b] = re * root_re - im * root_im;
        z.im[b] = re * root_im + im * root_re;
      }
    }
  }
}

void FourierTransform::backward(ComplexSignal& z) const {
  for (std::size_t half = 1; half < z.size(); half *= 2) {
    const std::size_t stride = z.size() / (2 * half);
    for (std::size_t block = 0; block < z.size(); block += 2 * half) {
      for (std::size_t j = 0; j < half; ++j) {
        const std::size_t a = block + j;
        const std::size_t b = a + half;
        const double root_re = roots_.re[j * stride];
        const double root_im = -roots_.im[j * stride];
        const double re = z.re[b] * root_re - z.im[b] * root_im;
        const double im = z.re[b] * root_im + z.im[b] * root_re;
        z.re[b] = z.re[a] - re;
        z.im[b] = z.im[a] - im;
        z.re[a] += re;
        z.im[a] += im;
      }
    }
  }
  const double scale = 1.0 / static_cast<double>(z.size());
  for (double& value : z.re) value *= scale;
  for (double& value : z.im) value *= scale;
}

}  // namespace stillfield
