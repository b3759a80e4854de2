// Draws of class means and variances against the closed form of their posterior.
//
// Source   Gelman, Carlin, Stern, Dunson, Vehtari, Rubin, Bayesian Data Analysis (3rd ed.), 3.3:
//          sd^2 | y ~ Inv-chi^2(nu_n, s_n^2), mean | y ~ t_nu_n(m_n, s_n^2 / kappa_n)
// Error    4 standard errors of moments over independent draws (6.3e-5 a comparison), fixed seeds
#include "model/gaussian_draw.h"

#include <algorithm>
#include <catch2/catch.hpp>
#include <cmath>

using namespace stillfield;

namespace {

struct Average {
  double n = 0.0, mean = 0.0, squares = 0.0;
  void add(double v) {
    n += 1.0;
    const double d = v - mean;
    mean += d / n;
    squares += d * (v - mean);
  }
  double deviations(double exact) const {
    return std::fabs(mean - exact) / std::sqrt(squares / (n - 1.0) / n);
  }
};

GreyLevels scale(double origin, double step) {
  GreyLevels g;
  g.origin = origin;
  g.step = step;
  g.levels = 1000;
  return g;
}

ClassSums sums_of(const std::vector<int>& levels) {
  ClassSums s;
  for (const int l : levels) {
    ++s.sites;
    ++s.observed;
    s.level_sum += static_cast<std::uint64_t>(l);
    s.level_square_sum += static_cast<std::uint64_t>(l) * static_cast<std::uint64_t>(l);
  }
  return s;
}

struct Posterior {
  double kappa, nu, mean, variance;  // kappa_n, nu_n, m_n, s_n^2
};

Posterior posterior_of(const GreyLevels& g, const std::vector<int>& levels,
                       const GaussianPrior& p) {
  const auto n = static_cast<double>(levels.size());
  double mean = 0.0, squares = 0.0;
  for (const int l : levels) mean += g.value(l) / n;
  for (const int l : levels) squares += (g.value(l) - mean) * (g.value(l) - mean);
  Posterior post;
  post.kappa = p.kappa + n;
  post.nu = p.nu + n;
  post.mean = (p.kappa * p.mean + n * mean) / post.kappa;
  post.variance =
      (p.nu * p.variance + squares + p.kappa * n / post.kappa * (mean - p.mean) * (mean - p.mean)) /
      post.nu;
  return post;
}

}  // namespace

TEST_CASE("draws of separate classes have the moments of their posterior") {
  const GreyLevels grey = scale(-30.0, 0.5);
  const std::vector<std::vector<int>> levels = {{100, 110, 95, 104, 120, 99, 101},
                                                {600, 640, 585, 610, 622, 570, 655, 601, 590}};
  const GaussianPrior prior{100.0, 0.5, 40.0, 4.0};
  const std::vector<ClassSums> sums = {sums_of(levels[0]), sums_of(levels[1])};
  RandomStream random(chain_key(11, 0), Purpose::kParameters);
  GaussianClasses classes{{0.0, 1.0}, {1.0, 1.0}, false};
  std::vector<Average> mean(2), mean_square(2), precision(2), log_variance(2);
  const Posterior post[2] = {posterior_of(grey, levels[0], prior),
                             posterior_of(grey, levels[1], prior)};
  constexpr int kDraws = 100000;
  int kept = 0;
  for (int i = 0; i < kDraws; ++i) {
    kept += !draw_gaussian_classes(grey, sums, prior, random, classes);
    for (std::size_t k = 0; k < 2; ++k) {
      const double d = classes.mean[k] - post[k].mean;
      mean[k].add(classes.mean[k]);
      mean_square[k].add(d * d);
      precision[k].add(1.0 / (classes.sd[k] * classes.sd[k]));
      log_variance[k].add(1.0 / std::pow(classes.sd[k], 4.0));
    }
  }
  CHECK(kept == 0);  // the classes are far apart
  for (std::size_t k = 0; k < 2; ++k) {
    const Posterior& p = post[k];
    CHECK(mean[k].deviations(p.mean) <= 4.0);
    CHECK(mean_square[k].deviations(p.variance / p.kappa * p.nu / (p.nu - 2.0)) <= 4.0);
    // 1 / sd^2 ~ Gamma(nu_n / 2, rate nu_n s_n^2 / 2)
    CHECK(precision[k].deviations(1.0 / p.variance) <= 4.0);
    CHECK(log_variance[k].deviations((1.0 + 2.0 / p.nu) / (p.variance * p.variance)) <= 4.0);
  }
}

TEST_CASE("a shared variance pools the squares of all classes") {
  const GreyLevels grey = scale(0.0, 1.0);
  const std::vector<std::vector<int>> levels = {{100, 110, 95, 104}, {600, 640, 585, 610, 622}};
  const GaussianPrior prior{300.0, 0.2, 100.0, 3.0};
  double nu = prior.nu, scale_sum = prior.nu * prior.variance;
  for (const auto& l : levels) {
    const Posterior p = posterior_of(grey, l, prior);
    nu += p.nu - prior.nu;
    scale_sum += p.nu * p.variance - prior.nu * prior.variance;
  }
  RandomStream random(chain_key(12, 0), Purpose::kParameters);
  GaussianClasses classes{{0.0, 1.0}, {1.0, 1.0}, true};
  Average precision, first_mean;
  bool equal = true;
  for (int i = 0; i < 50000; ++i) {
    draw_gaussian_classes(grey, {sums_of(levels[0]), sums_of(levels[1])}, prior, random, classes);
    equal = equal && classes.sd[0] == classes.sd[1];
    precision.add(1.0 / (classes.sd[0] * classes.sd[0]));
    first_mean.add(classes.mean[0]);
  }
  CHECK(equal);
  // The means hardly ever come out of order, so the order rule does not show.
  CHECK(precision.deviations(nu / scale_sum) <= 4.0);
  CHECK(first_mean.deviations(posterior_of(grey, levels[0], prior).mean) <= 4.0);
}

TEST_CASE("a draw out of order keeps the old classes, every other one is taken") {
  const GreyLevels grey = scale(0.0, 1.0);
  const std::vector<ClassSums> sums = {sums_of({500, 520, 480}), sums_of({505, 515, 490})};
  const GaussianPrior prior{500.0, 0.1, 400.0, 2.0};
  RandomStream random(chain_key(13, 0), Purpose::kParameters);
  GaussianClasses classes{{1.0, 2.0}, {3.0, 4.0}, false};
  int kept = 0, changed = 0;
  for (int i = 0; i < 2000; ++i) {
    const GaussianClasses before = classes;
    const bool taken = draw_gaussian_classes(grey, sums, prior, random, classes);
    kept += !taken;
    changed += taken;
    REQUIRE(std::is_sorted(classes.mean.begin(), classes.mean.end()));
    REQUIRE((classes.mean == before.mean) == !taken);
    REQUIRE((classes.sd == before.sd) == !taken);
  }
  CHECK(kept > 500);
  CHECK(changed > 500);
}

TEST_CASE("a class without observed pixels is drawn from the prior") {
  const GreyLevels grey = scale(0.0, 1.0);
  ClassSums empty;
  empty.sites = 40;  // all of them missing
  const GaussianPrior prior{-1000.0, 4.0, 9.0, 8.0};
  RandomStream random(chain_key(14, 0), Purpose::kParameters);
  GaussianClasses classes{{-1000.0, 500.0}, {1.0, 1.0}, false};
  Average mean, precision;
  for (int i = 0; i < 50000; ++i) {
    draw_gaussian_classes(grey, {empty, sums_of(std::vector<int>(1000, 700))}, prior, random,
                          classes);
    mean.add(classes.mean[0]);
    precision.add(1.0 / (classes.sd[0] * classes.sd[0]));
  }
  CHECK(mean.deviations(-1000.0) <= 4.0);
  CHECK(precision.deviations(1.0 / 9.0) <= 4.0);
}

TEST_CASE("sums of the largest images do not lose their spread") {
  // 2^32 pixels at levels 60000 and 60001 in equal parts: variance 1/4 under sums of 1.5e19.
  const GreyLevels grey = scale(0.0, 1.0);
  ClassSums big;
  big.sites = big.observed = std::uint64_t{1} << 32;
  big.level_sum = (std::uint64_t{1} << 31) * 120001;
  big.level_square_sum = (std::uint64_t{1} << 31) * (60000ULL * 60000 + 60001ULL * 60001);
  const GaussianPrior prior{60000.0, 0.01, 1.0, 2.0};
  RandomStream random(chain_key(15, 0), Purpose::kParameters);
  GaussianClasses classes{{0.0, 1.0}, {1.0, 1.0}, false};
  draw_gaussian_classes(grey, {sums_of({10}), big}, prior, random, classes);
  CHECK(classes.mean[1] == Approx(60000.5).epsilon(1e-8));
  CHECK(classes.sd[1] == Approx(0.5).epsilon(1e-4));
}
