#include "exactness/strip.h"

#include <cmath>
#include <cstddef>
#include <vector>

namespace stillfield::exactness {
namespace {

// A number and its derivative by beta.
struct Dual {
  double value = 0.0;
  double slope = 0.0;
};

}  // namespace

StripSums sum_strip(int width, int height, int classes, double beta) {
  // state = labels of the last `width` pixels, one digit (base `classes`) a column.
  const auto k = static_cast<std::size_t>(classes);
  std::vector<std::size_t> digit{1};
  for (int x = 0; x < width; ++x) digit.push_back(digit.back() * k);
  const std::size_t states = digit.back();
  // In the first row the digits of later columns stand for nothing: start from their zeros alone.
  std::vector<Dual> now(states), next(states);
  now[0] = {1.0, 0.0};
  StripSums sums;
  const double tie = std::exp(beta);
  for (int y = 0; y < height; ++y) {
    for (int x = 0; x < width; ++x) {
      const std::size_t place = digit[static_cast<std::size_t>(x)];
      next.assign(states, {});
      double total = 0.0;
      for (std::size_t s = 0; s < states; ++s) {
        if (now[s].value == 0.0) continue;
        const std::size_t above = s / place % k;
        const std::size_t left = x > 0 ? s / digit[static_cast<std::size_t>(x - 1)] % k : k;
        for (std::size_t label = 0; label < k; ++label) {
          const int equal = (y > 0 && label == above) + (label == left);
          const double w = equal == 0 ? 1.0 : equal == 1 ? tie : tie * tie;
          Dual& to = next[s - above * place + label * place];
          to.value += w * now[s].value;
          to.slope += w * (now[s].slope + equal * now[s].value);
          total += w * now[s].value;
        }
      }
      for (Dual& d : next) d = {d.value / total, d.slope / total};
      sums.log_z += std::log(total);
      now.swap(next);
    }
  }
  for (const Dual& d : now) sums.mean_pairs += d.slope;
  return sums;
}

}  // namespace stillfield::exactness
