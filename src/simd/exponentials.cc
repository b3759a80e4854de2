// Range and bytes: simd/exponentials.h; the series and its error: core/elementary.cc.
#include "simd/exponentials.h"

#undef HWY_TARGET_INCLUDE
#define HWY_TARGET_INCLUDE "simd/exponentials.cc"
#include <hwy/foreach_target.h>
// foreach_target.h must come first.
#include <hwy/highway.h>

HWY_BEFORE_NAMESPACE();
namespace stillfield {
namespace HWY_NAMESPACE {
namespace hn = hwy::HWY_NAMESPACE;

using Doubles = hn::CappedTag<double, kExponentialsBatch>;
using Exponents = hn::Vec<Doubles>;

constexpr double kLn2Hi = 6.93147180369123816490e-01;
constexpr double kLn2Lo = 1.90821492927058770002e-10;
constexpr double kLog2E = 1.44269504088896338700e+00;
constexpr double kSeries[] = {1.0 / 479001600.0,
                              1.0 / 39916800.0,
                              1.0 / 3628800.0,
                              1.0 / 362880.0,
                              1.0 / 40320.0,
                              1.0 / 5040.0,
                              1.0 / 720.0,
                              1.0 / 120.0,
                              1.0 / 24.0,
                              1.0 / 6.0,
                              0.5};
// A double of integer part n plus this one holds n in its lowest bits.
constexpr double kIntegerBits = 6755399441055744.0;  // 1.5 * 2^52

// 2^n for integers -1022 <= n <= 1023.
HWY_INLINE Exponents power_of_two(Exponents n) {
  const Doubles d;
  const hn::RebindToSigned<Doubles> integer;
  const auto bits = hn::BitCast(integer, hn::Add(n, hn::Set(d, kIntegerBits)));
  return hn::BitCast(d, hn::ShiftLeft<52>(hn::Add(bits, hn::Set(integer, 1023))));
}

void exponentials(double* values, std::ptrdiff_t n) {
  const Doubles d;
  const auto lanes = static_cast<std::ptrdiff_t>(hn::Lanes(d));
  const Exponents end = hn::Set(d, kLargestExponent);
  const Exponents one = hn::Set(d, 1.0);
  for (std::ptrdiff_t i = 0; i < n; i += lanes) {
    const Exponents x = hn::Max(hn::Neg(end), hn::Min(end, hn::LoadU(d, values + i)));
    const Exponents k = hn::Floor(hn::Add(hn::Mul(x, hn::Set(d, kLog2E)), hn::Set(d, 0.5)));
    const Exponents hi = hn::Sub(x, hn::Mul(k, hn::Set(d, kLn2Hi)));
    const Exponents lo = hn::Mul(k, hn::Set(d, kLn2Lo));
    const Exponents r = hn::Sub(hi, lo);
    Exponents p = hn::Set(d, 1.0 / 6227020800.0);
    for (const double term : kSeries) p = hn::Add(hn::Mul(p, r), hn::Set(d, term));
    const Exponents tail = hn::Sub(hn::Sub(hi, r), lo);
    const Exponents e = hn::Add(one, hn::Add(r, hn::Add(hn::Mul(hn::Mul(r, r), p), tail)));
    hn::StoreU(hn::Mul(e, power_of_two(k)), d, values + i);
  }
}

}  // namespace HWY_NAMESPACE
}  // namespace stillfield
HWY_AFTER_NAMESPACE();

#if HWY_ONCE
namespace stillfield {

HWY_EXPORT(exponentials);

void exponentials(double* x, std::ptrdiff_t n) {
  HWY_DYNAMIC_DISPATCH(exponentials)(x, n);
}

}  // namespace stillfield
#endif
