// Weight tables against the model's formula with libm.
#include "model/weight_table.h"

#include <algorithm>
#include <catch2/catch.hpp>
#include <cmath>

using namespace stillfield;

namespace {

GreyLevels ramp(int levels, double origin, double step) {
  GreyLevels g;
  g.levels = levels;
  g.origin = origin;
  g.step = step;
  g.histogram.assign(static_cast<std::size_t>(levels), 1);
  return g;
}

LabelModel model_of(int classes) {
  LabelModel m;
  for (int k = 0; k < classes; ++k) {
    m.prior.alpha.push_back(0.3 * k * (k % 2 == 0 ? 1 : -1));
    m.classes.mean.push_back(-5.0 + 30.0 * k);
    m.classes.sd.push_back(6.0 + k);
  }
  return m;
}

double log_weight(const LabelModel& m, std::size_t k, double value) {
  const double d = (value - m.classes.mean[k]) / m.classes.sd[k];
  return m.prior.alpha[k] - std::log(m.classes.sd[k]) - 0.5 * d * d;
}

}  // namespace

TEST_CASE("three and more labels have weights relative to the largest") {
  for (const int classes : {3, 5, 8, 64}) {
    const GreyLevels g = ramp(120, -20.0, 0.75);
    const LabelModel m = model_of(classes);
    WeightTable table;
    fill_weight_table(g, m, table);
    REQUIRE(table.planes == classes);
    REQUIRE(table.levels == 121);
    for (int l = 0; l < g.levels; ++l) {
      std::vector<double> expected;
      for (std::size_t k = 0; k < m.classes.mean.size(); ++k) {
        expected.push_back(log_weight(m, k, g.value(l)));
      }
      const double top = *std::max_element(expected.begin(), expected.end());
      for (std::size_t k = 0; k < expected.size(); ++k) {
        const double w = std::exp(expected[k] - top);
        const float got = table.value[k * 121 + static_cast<std::size_t>(l)];
        if (w < 1e-37) {
          CHECK(got == 0.0f);
        } else {
          CHECK(got == Approx(w).epsilon(1e-6));
        }
      }
    }
    // Missing pixels: the class field alone.
    const double top = *std::max_element(m.prior.alpha.begin(), m.prior.alpha.end());
    for (std::size_t k = 0; k < m.prior.alpha.size(); ++k) {
      CHECK(table.value[k * 121 + 120] == Approx(std::exp(m.prior.alpha[k] - top)).epsilon(1e-6));
    }
  }
}

TEST_CASE("two labels have one ratio, within 1e-30 and 1e30") {
  const GreyLevels g = ramp(200, -100.0, 1.0);
  LabelModel m = model_of(2);
  m.classes.mean = {-60.0, 70.0};
  m.classes.sd = {7.0, 12.0};
  WeightTable table;
  fill_weight_table(g, m, table);
  REQUIRE(table.planes == 1);
  int clamped = 0;
  for (int l = 0; l < g.levels; ++l) {
    const double ratio = log_weight(m, 0, g.value(l)) - log_weight(m, 1, g.value(l));
    const double limit = 30.0 * std::log(10.0);
    clamped += std::fabs(ratio) > limit;
    CHECK(table.value[static_cast<std::size_t>(l)] ==
          Approx(std::exp(std::clamp(ratio, -limit, limit))).epsilon(1e-6));
  }
  CHECK(clamped > 0);
  CHECK(table.value[200] == Approx(std::exp(m.prior.alpha[0] - m.prior.alpha[1])).epsilon(1e-6));
}

TEST_CASE("a table is refilled for a changed model, and only where levels occur") {
  GreyLevels g = ramp(10, 0.0, 1.0);
  g.histogram[4] = 0;
  LabelModel m = model_of(3);
  WeightTable table;
  fill_weight_table(g, m, table);
  const float before = table.value[11 + 5];  // of the second class
  m.classes.mean[0] += 3.0;
  fill_weight_table(g, m, table);
  CHECK(table.value[11 + 5] != before);
  for (std::size_t k = 0; k < 3; ++k) CHECK(table.value[k * 11 + 4] == 0.0f);
}
