#include "sampler/patch_wishart.h"

#include <cmath>

#include "core/elementary.h"
#include "random/counters.h"
#include "random/normal.h"
#include "simd/normals.h"
#include "simd/patch_group.h"

namespace stillfield {
namespace {

constexpr int kTriangleColour = 0;
constexpr int kShapeColour = 1;
constexpr int kAcceptColour = 2;
constexpr int kRetryColour = 3;

// Gamma(shape), scale 1, from a proposal's normal and uniform; below 0 when it is rejected.
double gamma_or_reject(double shape, double normal, double uniform) {
  const double d = shape - 1.0 / 3.0;
  const double root = 1.0 + normal / std::sqrt(9.0 * d);
  if (root <= 0.0) return -1.0;
  const double v = root * root * root;
  const double square = normal * normal;
  // The squeeze spares the logarithms nearly always.
  if (uniform < 1.0 - 0.0331 * square * square) return d * v;
  return exact_log(uniform) < 0.5 * square + d - d * v + d * exact_log(v) ? d * v : -1.0;
}

double uniform_of(std::uint32_t word) {
  return (static_cast<double>(word) + 0.5) * 0x1p-32;
}

}  // namespace

void fill_bartlett(const WishartStream& stream, int d, int degrees, float* triangle) {
  const auto counter = [&stream](int colour) {
    return PhiloxCounter{0, stream.position, stream.sweep,
                         counter_word3(Purpose::kGroup, static_cast<std::uint32_t>(colour), 0)};
  };
  standard_normals(stream.key, counter(kTriangleColour),
                   static_cast<std::size_t>(triangle_elements(d)) * kPatchLanes, triangle);
  float normal[kMaxPatchElements * kPatchLanes];
  standard_normals(stream.key, counter(kShapeColour), static_cast<std::size_t>(d) * kPatchLanes,
                   normal);
  PhiloxCounter accept = counter(kAcceptColour);
  PhiloxCounter words{};
  for (int i = 0; i < d; ++i) {
    const double shape = 0.5 * (degrees - (d - 1 - i));
    float* out = triangle + triangle_at(i, i) * kPatchLanes;
    for (int lane = 0; lane < kPatchLanes; ++lane) {
      const int n = i * kPatchLanes + lane;
      if (n % 4 == 0) {
        accept[0] = static_cast<std::uint32_t>(n / 4);
        words = philox4x32(accept, stream.key);
      }
      const double u = uniform_of(words[static_cast<std::size_t>(n % 4)]);
      double g = gamma_or_reject(shape, double{normal[n]}, u);
      for (std::uint32_t attempt = 0; g < 0.0; ++attempt) {
        PhiloxCounter retry = counter(kRetryColour);
        retry[0] = static_cast<std::uint32_t>(n) << 16 | attempt;
        const PhiloxCounter w = philox4x32(retry, stream.key);
        g = gamma_or_reject(shape, double{standard_normal(w[0])}, uniform_of(w[1]));
      }
      out[lane] = static_cast<float>(std::sqrt(2.0 * g));
    }
  }
}

}  // namespace stillfield
