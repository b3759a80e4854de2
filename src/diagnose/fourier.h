// Discrete Fourier transform for convolutions, length a power of two.
//
// Own code because library transforms take their roots of unity from the C library's sine and
// cosine, which differ between machines; here they come from square roots (half-angle formulas).
// Maths    Z_k = sum_j z_j exp(-2 pi i j k / N), radix 2 [Cooley & Tukey 1965]
// Layout   real and imaginary parts in arrays of their own. (Interleaved, g++ 12 turns the products
//          into fused multiply-add where the CPU has it, even under -ffp-contract=off.)
// Order    forward() leaves the spectrum in bit-reversed order and backward() expects it so: right
//          for pointwise work on spectra, and no reordering is needed. backward() also divides by
//          N.
// Cost     O(N log N)
#ifndef STILLFIELD_DIAGNOSE_FOURIER_H_
#define STILLFIELD_DIAGNOSE_FOURIER_H_

#include <cstddef>
#include <vector>

namespace stillfield {

struct ComplexSignal {
  explicit ComplexSignal(std::size_t length) : re(length), im(length) {}
  std::size_t size() const { return re.size(); }

  std::vector<double> re;
  std::vector<double> im;
};

class FourierTransform {
 public:
  // length: a power of two, at least 2.
  explicit FourierTransform(std::size_t length);

  // z has the length given above and is transformed in place.
  void forward(ComplexSignal& z) const;
  void backward(ComplexSignal& z) const;

 private:
  ComplexSignal roots_;  // exp(-2 pi i k / N), k < N/2
};

}  // namespace stillfield

#endif  // STILLFIELD_DIAGNOSE_FOURIER_H_
