// Redraws the white-noise values of pixels that are missing, saturated, hit by an impulse or
// noisier than the rest, so that the field sees u_s = x_s + N(0, s0^2) everywhere.
//
// Given    x_s ~ N(m, v) from the field's current state, y the measured value, s the pixel's own
//          noise sd (never taken below s0), t^2 = v + s0^2
// Draws    missing     u ~ N(m, t^2)
//          saturated   u ~ N(m, t^2) restricted to u >= saturation (Tobin 1958; Chib 1992)
//          plain       u = y where s = s0, else u | y ~ N((m r + y t^2) / (r + t^2), r t^2 / (r +
//          t^2))
//                      with r = s^2 - s0^2
//          impulse?    with probability rho g(y) / (rho g(y) + (1 - rho) N(y; m, v + s^2)) a plain
//                      pixel is an impulse and u is drawn as if missing; g = impulse_density.h.
//                      rho ~ Beta(1 + impulses, kRegular + the others), before each sweep
// Random   Purpose::kRedraw. A pixel's block: c0 = column, c1 = row (both global), colour 0: its
//          words are the indicator's uniform, a spare, the normal, a spare. Colours 1 to 6 hold the
//          tries of a truncated normal; rho comes from the stream of the sweep
// Bytes    the same for any pool
#ifndef STILLFIELD_SAMPLER_NOISE_REDRAW_H_
#define STILLFIELD_SAMPLER_NOISE_REDRAW_H_

#include <cstdint>
#include <vector>

#include "model/impulse_density.h"
#include "model/noise_model.h"
#include "random/philox.h"
#include "sampler/pixel_redraw.h"

namespace stillfield {

enum class PixelState : std::uint8_t { kPlain = 0, kMissing = 1, kSaturated = 2 };

struct RedrawProblem {
  Volume<float> observed;
  Volume<std::uint8_t> state;  // PixelState
  NoiseModel noise;
  double white_sd = 0.0;  // s0 > 0
  double saturation = 0.0;
  bool impulses = false;
  ImpulseDensity density;      // with impulses only
  double impulse_share = 0.0;  // where rho starts
};

class NoiseRedraw : public PixelRedraw {
 public:
  static constexpr double kRegular = 20.0;  // weight of the prior's regular pixels

  // Throws Error(kUsage) unless white_sd > 0.
  NoiseRedraw(RedrawProblem problem, PhiloxKey key);

  void redraw(const IntensityMoments& now, std::uint32_t sweep, const Pool& pool,
              Volume<float>& value) override;

  double impulse_share() const { return share_; }

  // Mean over the redraws since the last reset of each pixel's probability to be an impulse.
  Volume<float> impulse_probability() const;
  void reset_means();

 private:
  void draw_share(std::uint32_t sweep);

  RedrawProblem problem_;
  PhiloxKey key_;
  double share_;
  std::int64_t plain_ = 0;
  std::int64_t impulses_ = -1;  // of the last redraw; below 0: none yet
  Volume<float> probability_;   // sums
  int redraws_ = 0;
};

// A draw of N(0, 1) restricted to z >= limit, from the tries of one pixel: the normal itself below
// limit 0, else by an exponential envelope (Robert 1995). The c3 of `counter` has colour 0.
double truncated_normal(double limit, PhiloxCounter counter, PhiloxKey key);

}  // namespace stillfield

#endif  // STILLFIELD_SAMPLER_NOISE_REDRAW_H_
