#include "sampler/patch_sums.h"

#include <algorithm>

namespace stillfield {

PatchSums::PatchSums(const Volume<float>& origin) : origin_(&origin), sums_(origin.extent()) {}

void PatchSums::clear(const Pool& pool) {
  pool.for_bands(sums_.height(), 16, [&](int first, int last) {
    for (int y = first; y < last; ++y) {
      std::fill_n(sums_.row(y), sums_.width(), PixelSums{0.0f, 0.0f, 0.0f, 0.0f});
    }
  });
}

float PatchSums::mean(int x, int y) const {
  const PixelSums& s = sums_.at(x, y);
  const float origin = origin_->at(x, y);
  return s.precision > 0.0f ? origin + s.weighted_mean / s.precision : origin;
}

float PatchSums::variance(int x, int y) const {
  const PixelSums& s = sums_.at(x, y);
  if (!(s.precision > 0.0f)) return 1.0f;
  const float off = s.weighted_mean / s.precision;
  const float between = std::max(s.weighted_square / s.precision - off * off, 0.0f);
  return s.count / s.precision + between;
}

}  // namespace stillfield
