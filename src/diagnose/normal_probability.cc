#include "diagnose/normal_probability.h"

#include "core/elementary.h"

namespace stillfield {
namespace {

constexpr double kEnd = 8.0;
constexpr double kOneOverRootTwoPi = 0.3989422804014327;

}  // namespace

double normal_probability(double x) {
  if (x != x) return x;
  if (x < -kEnd) return 0.0;
  if (x > kEnd) return 1.0;
  double sum = x, term = x, before = 0.0;
  for (double i = 3.0; sum != before; i += 2.0) {
    before = sum;
    term = term * x * x / i;
    sum += term;
  }
  return 0.5 + sum * kOneOverRootTwoPi * exact_exp(-0.5 * x * x);
}

}  // namespace stillfield
