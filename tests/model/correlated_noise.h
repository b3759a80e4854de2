// Moving-average noise: its correlation has the reach 1 and is known in closed form.
//
// Maths    n(x, y) = sum over i, j in {0, 1} of a^i a^j e(x + i, y + j) / (1 + a^2), e white:
//          variance 1, rho(dx, dy) = r(dx) r(dy), r(0) = 1, r(1) = a / (1 + a^2), 0 beyond
#ifndef STILLFIELD_TESTS_MODEL_CORRELATED_NOISE_H_
#define STILLFIELD_TESTS_MODEL_CORRELATED_NOISE_H_

#include <cstdlib>

#include "core/volume.h"
#include "model/patch_noise.h"
#include "random/stream.h"

namespace stillfield::testing {

inline double moving_average_rho(double a, int dx, int dy) {
  const double next = a / (1.0 + a * a);
  const auto along = [next](int lag) { return lag == 0 ? 1.0 : std::abs(lag) == 1 ? next : 0.0; };
  return along(dx) * along(dy);
}

inline NoiseCorrelationModel moving_average_model(double a, int reach) {
  NoiseCorrelationModel model;
  model.reach = reach;
  for (int dy = -reach; dy <= reach; ++dy) {
    for (int dx = -reach; dx <= reach; ++dx) model.rho.push_back(moving_average_rho(a, dx, dy));
  }
  return model;
}

inline Volume<float> moving_average_noise(Extent e, double a, RandomStream& random) {
  Volume<float> white({e.width + 1, e.height + 1, 1});
  for (int y = 0; y <= e.height; ++y) {
    for (int x = 0; x <= e.width; ++x) white.at(x, y) = static_cast<float>(random.normal());
  }
  Volume<float> out(e);
  for (int y = 0; y < e.height; ++y) {
    for (int x = 0; x < e.width; ++x) {
      const double above = double{white.at(x, y)} + a * double{white.at(x + 1, y)};
      const double below = double{white.at(x, y + 1)} + a * double{white.at(x + 1, y + 1)};
      out.at(x, y) = static_cast<float>((above + a * below) / (1.0 + a * a));
    }
  }
  return out;
}

}  // namespace stillfield::testing

#endif  // STILLFIELD_TESTS_MODEL_CORRELATED_NOISE_H_
