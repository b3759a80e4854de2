#include "sampler/noise_redraw.h"

#include <algorithm>
#include <cmath>
#include <utility>

#include "core/elementary.h"
#include "core/error.h"
#include "random/counters.h"
#include "random/normal.h"
#include "random/stream.h"

namespace stillfield {
namespace {

constexpr std::uint32_t kFirstTry = 1;  // colours of the tries of a truncated normal
constexpr std::uint32_t kLastTry = 6;
constexpr double kNormalBelow = 0.0;
constexpr double kRootTwoPi = 2.5066282746310002;

double uniform_of(std::uint32_t word) {
  return (static_cast<double>(word) + 0.5) * 0x1p-32;
}

double normal_density(double y, double mean, double variance) {
  const double d = y - mean;
  return exact_exp(-0.5 * d * d / variance) / (kRootTwoPi * std::sqrt(variance));
}

}  // namespace

double truncated_normal(double limit, PhiloxCounter counter, PhiloxKey key) {
  const double rate = 0.5 * (limit + std::sqrt(limit * limit + 4.0));
  for (std::uint32_t colour = kFirstTry; colour <= kLastTry; ++colour) {
    ++counter[3];
    const PhiloxCounter word = philox4x32(counter, key);
    if (limit < kNormalBelow) {
      for (const std::uint32_t w : word) {
        if (const double z = standard_normal(w); z >= limit) return z;
      }
      continue;
    }
    for (std::size_t i = 0; i < 4; i += 2) {
      const double z = limit - exact_log(uniform_of(word[i])) / rate;
      const double d = z - rate;
      if (uniform_of(word[i + 1]) <= exact_exp(-0.5 * d * d)) return z;
    }
  }
  // All tries failed (less than once in 10^7 draws): the mean of the exponential envelope.
  return std::max(limit, 0.0) + 1.0 / std::max(rate, 1.0);
}

NoiseRedraw::NoiseRedraw(RedrawProblem problem, PhiloxKey key)
    : problem_(std::move(problem)),
      key_(key),
      share_(problem_.impulse_share),
      probability_(problem_.observed.extent()) {
  if (!(problem_.white_sd > 0.0)) {
    throw Error(ErrorKind::kUsage, "the noise level must be a number above 0");
  }
}

void NoiseRedraw::draw_share(std::uint32_t sweep) {
  if (impulses_ < 0) return;
  RandomStream random(key_, Purpose::kRedraw, sweep);
  const double hit = random.gamma(1.0 + static_cast<double>(impulses_));
  const double rest = random.gamma(kRegular + static_cast<double>(plain_ - impulses_));
  share_ = hit / (hit + rest);
}

void NoiseRedraw::redraw(const IntensityMoments& now, std::uint32_t sweep, const Pool& pool,
                         Volume<float>& value) {
  const Extent e = problem_.observed.extent();
  if (problem_.impulses) draw_share(sweep);
  struct RowCount {
    std::int64_t plain = 0, impulses = 0;
  };
  std::vector<RowCount> counts(static_cast<std::size_t>(e.height) *
                               static_cast<std::size_t>(e.depth));
  const double white = problem_.white_sd * problem_.white_sd;
  const Offset origin = problem_.observed.view().offset();

  const auto redraw_pixel = [&](int x, int y, int z, RowCount& count) {
    const double m = now.mean.at(x, y, z);
    const double v = std::max<double>(now.variance.at(x, y, z), 0.0);
    const double spread = v + white;
    const PhiloxCounter counter = {
        static_cast<std::uint32_t>(origin.x + x), static_cast<std::uint32_t>(origin.y + y), sweep,
        counter_word3(Purpose::kRedraw, 0, static_cast<std::uint32_t>(origin.z + z))};
    const PhiloxCounter word = philox4x32(counter, key_);
    const auto missing = [&] { return m + std::sqrt(spread) * standard_normal(word[2]); };
    const auto state = static_cast<PixelState>(problem_.state.at(x, y, z));
    if (state == PixelState::kMissing) return missing();
    if (state == PixelState::kSaturated) {
      const double scale = std::sqrt(spread);
      return m + scale * truncated_normal((problem_.saturation - m) / scale, counter, key_);
    }
    const double measured = problem_.observed.at(x, y, z);
    const double sd = std::max(problem_.noise.sd_at(m), problem_.white_sd);
    if (problem_.impulses) {
      ++count.plain;
      const double hit = share_ * problem_.density(measured);
      const double regular = (1.0 - share_) * normal_density(measured, m, v + sd * sd);
      // Both vanish for a value outside the range far from the mean: an impulse.
      const double p = hit + regular > 0.0 ? hit / (hit + regular) : 1.0;
      probability_.at(x, y, z) += static_cast<float>(p);
      if (uniform_of(word[0]) < p) {
        ++count.impulses;
        return missing();
      }
    }
    const double rest = sd * sd - white;
    if (!(rest > 1e-9 * white)) return measured;
    const double centre = (m * rest + measured * spread) / (rest + spread);
    return centre + std::sqrt(rest * spread / (rest + spread)) * standard_normal(word[2]);
  };

  const int grain = std::max(1, 4000 / std::max(e.width, 1));
  pool.for_bands(e.height * e.depth, grain, [&](int first, int last) {
    for (int i = first; i < last; ++i) {
      const int y = i % e.height, z = i / e.height;
      float* out = value.row(y, z);
      for (int x = 0; x < e.width; ++x) {
        out[x] = static_cast<float>(redraw_pixel(x, y, z, counts[static_cast<std::size_t>(i)]));
      }
    }
  });
  plain_ = impulses_ = 0;
  for (const RowCount& c : counts) {
    plain_ += c.plain;
    impulses_ += c.impulses;
  }
  ++redraws_;
}

Volume<float> NoiseRedraw::impulse_probability() const {
  const Extent e = probability_.extent();
  Volume<float> mean(e);
  const float scale = 1.0f / static_cast<float>(std::max(redraws_, 1));
  for (int z = 0; z < e.depth; ++z) {
    for (int y = 0; y < e.height; ++y) {
      for (int x = 0; x < e.width; ++x) mean.at(x, y, z) = probability_.at(x, y, z) * scale;
    }
  }
  return mean;
}

void NoiseRedraw::reset_means() {
  probability_ = Volume<float>(probability_.extent());
  redraws_ = 0;
}

}  // namespace stillfield
