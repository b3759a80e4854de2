#include "simd/patch_distance.h"

#undef HWY_TARGET_INCLUDE
#define HWY_TARGET_INCLUDE "simd/patch_distance.cc"
#include <hwy/foreach_target.h>
// foreach_target.h must come first.
#include <hwy/highway.h>

HWY_BEFORE_NAMESPACE();
namespace stillfield {
namespace HWY_NAMESPACE {
namespace hn = hwy::HWY_NAMESPACE;

using RunTag = hn::CappedTag<float, 16>;
using RunVec = hn::Vec<RunTag>;

void patch_distances(int side, const float* reference, const float* first, std::ptrdiff_t stride,
                     float* out) {
  const RunTag d;
  const int lanes = static_cast<int>(hn::Lanes(d));
  for (int x = 0; x < kDistanceRun; x += 2 * lanes) {
    RunVec sum0 = hn::Zero(d);
    RunVec sum1 = hn::Zero(d);
    for (int py = 0; py < side; ++py) {
      const float* candidate = first + py * stride + x;
      const float* wanted = reference + py * stride;
      for (int px = 0; px < side; ++px) {
        const RunVec w = hn::Set(d, wanted[px]);
        const RunVec off0 = hn::Sub(hn::LoadU(d, candidate + px), w);
        const RunVec off1 = hn::Sub(hn::LoadU(d, candidate + px + lanes), w);
        sum0 = hn::Add(sum0, hn::Mul(off0, off0));
        sum1 = hn::Add(sum1, hn::Mul(off1, off1));
      }
    }
    hn::StoreU(sum0, d, out + x);
    hn::StoreU(sum1, d, out + x + lanes);
  }
}

}  // namespace HWY_NAMESPACE
}  // namespace stillfield
HWY_AFTER_NAMESPACE();

#if HWY_ONCE
namespace stillfield {

HWY_EXPORT(patch_distances);

void patch_distances(int side, const float* reference, const float* first, std::ptrdiff_t stride,
                     float* out) {
  HWY_DYNAMIC_DISPATCH(patch_distances)(side, reference, first, stride, out);
}

}  // namespace stillfield
#endif
