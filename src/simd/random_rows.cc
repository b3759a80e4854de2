#include "simd/random_rows.h"

#undef HWY_TARGET_INCLUDE
#define HWY_TARGET_INCLUDE "simd/random_rows.cc"
#include <hwy/foreach_target.h>
// foreach_target.h must come first.
#include <hwy/highway.h>

#include "simd/philox-inl.h"

HWY_BEFORE_NAMESPACE();
namespace stillfield {
namespace HWY_NAMESPACE {

void random_row_pair(const RandomPlane& plane, std::uint32_t pair, int columns,
                     std::uint32_t* even_row, std::uint32_t* odd_row) {
  draw_row_pair(plane, pair, 0, columns, even_row, odd_row);
}

}  // namespace HWY_NAMESPACE
}  // namespace stillfield
HWY_AFTER_NAMESPACE();

#if HWY_ONCE
namespace stillfield {

HWY_EXPORT(random_row_pair);

void random_row_pair(const RandomPlane& plane, std::uint32_t pair, int columns,
                     std::uint32_t* even_row, std::uint32_t* odd_row) {
  HWY_DYNAMIC_DISPATCH(random_row_pair)(plane, pair, columns, even_row, odd_row);
}

}  // namespace stillfield
#endif
