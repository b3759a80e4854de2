// The edges field, with strength and noise drawn, against integration and against a plain sampler
// that has no auxiliary scales.
//
// Target   p(x, tau, v | y) prop. to tau^(n-1) e^(-tau S(x)) Gamma(tau; a, b) InvGamma(v; a', b')
//          prod_s N(y_s; x_s, v),  S = sum of w_st |x_s - x_t| over the pairs
#include <catch2/catch.hpp>
#include <cmath>
#include <random>

#include "exactness/intensity_sample.h"

using namespace stillfield;
using namespace stillfield::exactness;

namespace {

IntensityProblem make_problem(int width, int height, Connectivity connectivity) {
  IntensityProblem p;
  p.width = width;
  p.height = height;
  p.connectivity = connectivity;
  p.model.prior = IntensityPrior::kEdges;
  p.model.strength = {2.0, 20.0};
  p.model.noise = {3.0, 200.0};
  RandomStream random({8, 9}, Purpose::kSimulation);
  for (int s = 0; s < width * height; ++s) {
    p.value.push_back((s % width < width / 2 ? 100.0 : 150.0) + 10.0 * random.normal());
    p.variance.push_back(1.0);
  }
  return p;
}

// Random-walk Metropolis on the log density above, one unknown at a time, in double precision.
class PlainSampler {
 public:
  explicit PlainSampler(const IntensityProblem& p) : p_(p), x(p.value) {
    for (const NeighbourRing& ring : make_neighbourhood(p.connectivity).rings) {
      for (const Displacement& d : ring.neighbours) {
        for (int s = 0; s < p.width * p.height; ++s) {
          const int u = s % p.width + d.x, v = s / p.width + d.y;
          if (u < 0 || u >= p.width || v < 0 || v >= p.height) continue;
          pairs_.push_back({s, v * p.width + u, 0.5 * ring.weight});  // each pair twice
        }
      }
    }
    links_.resize(x.size());
    for (const Pair& pair : pairs_) {
      links_[static_cast<std::size_t>(pair.s)].push_back({pair.s, pair.t, 2.0 * pair.weight});
    }
  }

  void sweep() {
    for (std::size_t s = 0; s < x.size(); ++s) {
      const double there = x[s] + 12.0 * normal_(engine_);
      if (accept(local(s, there) - local(s, x[s]))) x[s] = there;
    }
    // On the logarithms of tau and v: the density gains a factor tau, or v.
    double differences = 0.0, residuals = 0.0;
    for (const Pair& pair : pairs_) differences += pair.weight * distance(pair);
    for (std::size_t s = 0; s < x.size(); ++s) {
      residuals += (p_.value[s] - x[s]) * (p_.value[s] - x[s]);
    }
    const auto n = static_cast<double>(x.size());
    const auto of_tau = [&](double t) {
      return (n - 1.0 + p_.model.strength.shape) * std::log(t) -
             t * (differences + p_.model.strength.rate);
    };
    const auto of_variance = [&](double v) {
      return -(p_.model.noise.shape + 0.5 * n) * std::log(v) -
             (p_.model.noise.rate + 0.5 * residuals) / v;
    };
    const double tau_there = tau * std::exp(0.3 * normal_(engine_));
    if (accept(of_tau(tau_there) - of_tau(tau))) tau = tau_there;
    const double variance_there = variance * std::exp(0.5 * normal_(engine_));
    if (accept(of_variance(variance_there) - of_variance(variance))) variance = variance_there;
  }

 private:
  struct Pair {
    int s, t;
    double weight;
  };

  double distance(const Pair& pair) const {
    return std::fabs(x[static_cast<std::size_t>(pair.s)] - x[static_cast<std::size_t>(pair.t)]);
  }
  double local(std::size_t s, double at) const {
    double sum = 0.0;
    for (const Pair& link : links_[s]) {
      sum += link.weight * std::fabs(at - x[static_cast<std::size_t>(link.t)]);
    }
    return -tau * sum - 0.5 * (p_.value[s] - at) * (p_.value[s] - at) / variance;
  }
  bool accept(double gain) { return std::log(uniform_(engine_)) < gain; }

  const IntensityProblem& p_;
  std::vector<Pair> pairs_;
  std::vector<std::vector<Pair>> links_;
  std::mt19937_64 engine_{12};
  std::normal_distribution<double> normal_;
  std::uniform_real_distribution<double> uniform_{0.0, 1.0};

 public:
  std::vector<double> x;
  double tau = 0.1;
  double variance = 100.0;
};

struct Series {
  explicit Series(std::size_t pixels, int batch)
      : tau(batch),
        log_tau(batch),
        sd(batch),
        x(pixels, BatchMeans(batch)),
        square(pixels, BatchMeans(batch)) {}
  void add(double t, double variance, const std::vector<double>& pixels) {
    tau.add(t);
    log_tau.add(std::log(t));
    sd.add(std::sqrt(variance));
    for (std::size_t s = 0; s < pixels.size(); ++s) {
      x[s].add(pixels[s]);
      square[s].add((pixels[s] - 125.0) * (pixels[s] - 125.0));
    }
  }
  BatchMeans tau, log_tau, sd;
  std::vector<BatchMeans> x, square;
};

double deviations(const BatchMeans& a, const BatchMeans& b) {
  const Estimate p = a.estimate(), q = b.estimate();
  return std::fabs(p.mean - q.mean) / std::hypot(p.mcse, q.mcse);
}

void check_against_plain(Connectivity connectivity) {
  const IntensityProblem p = make_problem(5, 4, connectivity);
  constexpr int kBatch = 2000, kBatches = 100;
  Series ours(p.value.size(), kBatch), plain(p.value.size(), kBatch);
  IntensitySample sample(p, {20261201, 3}, 0.1, 100.0);
  PlainSampler other(p);
  for (int i = -kBatch; i < kBatches * kBatch; ++i) {
    sample.sweep();
    sample.draw_parameters();
    other.sweep();
    if (i < 0) continue;
    ours.add(sample.chain.strength, sample.chain.noise_variance, sample.pixels());
    plain.add(other.tau, other.variance, other.x);
  }
  // 43 comparisons at 4 combined standard errors: false alarm some 4e-3 (Student's t).
  CAPTURE(static_cast<int>(connectivity));
  CHECK(deviations(ours.tau, plain.tau) <= 4.0);
  CHECK(deviations(ours.log_tau, plain.log_tau) <= 4.0);
  CHECK(deviations(ours.sd, plain.sd) <= 4.0);
  for (std::size_t s = 0; s < p.value.size(); ++s) {
    CAPTURE(s);
    CHECK(deviations(ours.x[s], plain.x[s]) <= 4.0);
    CHECK(deviations(ours.square[s], plain.square[s]) <= 4.0);
  }
}

}  // namespace

TEST_CASE("the edges field agrees with a plain Metropolis sampler of the same posterior") {
  check_against_plain(Connectivity::kFour);
  check_against_plain(Connectivity::kEight);
}

TEST_CASE("two pixels of an edges field have the moments of their density") {
  // With D = y_1 - y_2 and d = x_1 - x_2: p(d) prop. to exp(-tau |d| - (D - d)^2 / (4 v)), by sums
  // on a fine grid.
  for (const double difference : {0.0, 20.0}) {
    IntensityProblem p = make_problem(2, 1, Connectivity::kFour);
    p.value = {100.0, 100.0 + difference};
    const double tau = 0.15, variance = 60.0;
    double total = 0.0, mean = 0.0, square = 0.0, absolute = 0.0;
    for (double d = -200.0; d <= 200.0; d += 0.01) {
      const double off = -difference - d;
      const double density = std::exp(-tau * std::fabs(d) - off * off / (4.0 * variance));
      total += density;
      mean += density * d;
      square += density * d * d;
      absolute += density * std::fabs(d);
    }
    IntensitySample sample(p, {20261201, 4}, tau, variance);
    BatchMeans d(500), d2(500), abs_d(500);
    for (int i = 0; i < 100000; ++i) {
      sample.sweep();
      const std::vector<double> x = sample.pixels();
      const double here = x[0] - x[1];
      d.add(here);
      d2.add(here * here);
      abs_d.add(std::fabs(here));
    }
    CAPTURE(difference);
    CHECK(d.estimate().deviations(mean / total) <= 4.0);
    CHECK(d2.estimate().deviations(square / total) <= 4.0);
    CHECK(abs_d.estimate().deviations(absolute / total) <= 4.0);
  }
}
