#include "model/mixture_em.h"

#include <algorithm>
#include <catch2/catch.hpp>
#include <cmath>

#include "core/error.h"

using namespace stillfield;

namespace {

double normal_density(double v, double mean, double sd) {
  return std::exp(-0.5 * (v - mean) * (v - mean) / (sd * sd)) / sd;
}

// The expected histogram of a mixture on levels low, low + step, ...
GreyHistogram histogram_of(const std::vector<double>& mean, const std::vector<double>& sd,
                           const std::vector<double>& share, int levels, double step) {
  GreyHistogram h;
  h.step = step;
  for (int l = 0; l < levels; ++l) {
    double w = 0.0;
    for (std::size_t k = 0; k < mean.size(); ++k) {
      w += share[k] * normal_density(l * step, mean[k], sd[k]) * step / std::sqrt(2 * M_PI);
    }
    h.value.push_back(l * step);
    h.weight.push_back(1e6 * w);
  }
  return h;
}

}  // namespace

TEST_CASE("EM recovers the parameters of separated mixtures") {
  // Neighbouring means 6 or more deviations apart: the maximum of the likelihood of the expected
  // histogram is the mixture itself.
  struct Case {
    std::vector<double> mean, sd, share;
  };
  for (const Case& c :
       {Case{{60, 150}, {9, 14}, {0.7, 0.3}}, Case{{40, 120, 210}, {7, 10, 6}, {0.2, 0.5, 0.3}},
        Case{{30, 90, 150, 220}, {6, 6, 9, 8}, {0.05, 0.25, 0.3, 0.4}}}) {
    const int classes = static_cast<int>(c.mean.size());
    const Mixture m = fit_mixture(histogram_of(c.mean, c.sd, c.share, 256, 1.0), classes, false);
    for (std::size_t k = 0; k < c.mean.size(); ++k) {
      CAPTURE(classes, k);
      CHECK(m.classes.mean[k] == Approx(c.mean[k]).margin(0.1));
      CHECK(m.classes.sd[k] == Approx(c.sd[k]).epsilon(0.01));
      CHECK(m.proportion[k] == Approx(c.share[k]).margin(0.002));
      CHECK(most_likely_class(m, c.mean[k]) == static_cast<int>(k));
    }
  }
}

TEST_CASE("histograms of many levels are binned without losing the mixture") {
  const Mixture m =
      fit_mixture(histogram_of({15000, 40000}, {2000, 3000}, {0.6, 0.4}, 65000, 1.0), 2, false);
  CHECK(m.classes.mean[0] == Approx(15000).epsilon(0.005));
  CHECK(m.classes.mean[1] == Approx(40000).epsilon(0.005));
  CHECK(m.classes.sd[0] == Approx(2000).epsilon(0.02));
  CHECK(m.classes.sd[1] == Approx(3000).epsilon(0.02));
}

TEST_CASE("a shared variance is the pooled one") {
  const Mixture m = fit_mixture(histogram_of({60, 180}, {8, 12}, {0.5, 0.5}, 256, 1.0), 2, true);
  CHECK(m.classes.shared_variance);
  CHECK(m.classes.sd[0] == m.classes.sd[1]);
  CHECK(m.classes.sd[0] == Approx(std::sqrt((64.0 + 144.0) / 2.0)).epsilon(0.01));
}

TEST_CASE("the result is a stationary point of the likelihood") {
  // Overlapping classes: no closed form, but no small change may be better.
  const GreyHistogram h = histogram_of({100, 140}, {15, 20}, {0.4, 0.6}, 256, 1.0);
  const Mixture m = fit_mixture(h, 2, false);
  const auto log_likelihood = [&h](const Mixture& at) {
    double sum = 0.0;
    for (std::size_t i = 0; i < h.value.size(); ++i) {
      double p = 0.0;
      for (std::size_t k = 0; k < 2; ++k) {
        p += at.proportion[k] * normal_density(h.value[i], at.classes.mean[k], at.classes.sd[k]);
      }
      sum += h.weight[i] * std::log(p);
    }
    return sum;
  };
  const double best = log_likelihood(m);
  for (const double step : {-0.5, 0.5}) {
    for (std::size_t k = 0; k < 2; ++k) {
      Mixture other = m;
      other.classes.mean[k] += step;
      CHECK(log_likelihood(other) < best);
      other = m;
      other.classes.sd[k] += step;
      CHECK(log_likelihood(other) < best);
    }
    Mixture other = m;
    other.proportion[0] += 0.02 * step;
    other.proportion[1] -= 0.02 * step;
    CHECK(log_likelihood(other) < best);
  }
}

TEST_CASE("two levels make two classes of the least variance") {
  GreyHistogram h{{10.0, 20.0}, {5.0, 5.0}, 1.0};
  const Mixture m = fit_mixture(h, 2, false);
  CHECK(m.classes.mean[0] == Approx(10.0).margin(1e-6));
  CHECK(m.classes.mean[1] == Approx(20.0).margin(1e-6));
  CHECK(m.classes.sd[0] >= std::sqrt(1.0 / 12.0) * (1 - 1e-12));
}

TEST_CASE("fewer levels than classes are refused") {
  CHECK_THROWS_AS(fit_mixture({{10.0, 20.0}, {5.0, 5.0}, 1.0}, 3, false), Error);
}
