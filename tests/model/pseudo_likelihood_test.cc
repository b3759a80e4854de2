// The pseudo-likelihood climb against an independent maximiser.
#include "model/pseudo_likelihood.h"

#include <catch2/catch.hpp>
#include <cmath>

#include "random/stream.h"

using namespace stillfield;

namespace {

// Labels drawn from their conditionals given random neighbour counts at known parameters.
NeighbourCounts draw_counts(int classes, const LabelPrior& truth, int pixels) {
  NeighbourCounts counts;
  counts.classes = classes;
  RandomStream random(chain_key(9, 0), Purpose::kSimulation);
  for (int s = 0; s < pixels; ++s) {
    std::vector<float> n(static_cast<std::size_t>(classes));
    for (int t = 0; t < 4; ++t) {
      n[static_cast<std::size_t>(random.uniform() * random.uniform() * classes)] += 1.0f;
      n[static_cast<std::size_t>(random.uniform() * classes)] += 0.70710678f;
    }
    std::vector<double> p;
    double sum = 0.0;
    for (std::size_t k = 0; k < n.size(); ++k) {
      p.push_back(std::exp(truth.alpha[k] + truth.beta * n[k]));
      sum += p.back();
    }
    double u = sum * random.uniform();
    std::size_t label = 0;
    while (label + 1 < p.size() && u >= p[label]) u -= p[label++];
    counts.label.push_back(static_cast<std::uint8_t>(label));
    counts.count.insert(counts.count.end(), n.begin(), n.end());
  }
  return counts;
}

// ln PL of the formula in the header, with the weak prior (sd 10 around 0 and 1).
double log_pseudo_likelihood(const NeighbourCounts& counts, const LabelPrior& at) {
  const auto classes = static_cast<std::size_t>(counts.classes);
  double sum = -0.005 * (at.beta - 1.0) * (at.beta - 1.0);
  for (const double a : at.alpha) sum -= 0.005 * a * a;
  for (std::size_t s = 0; s < counts.label.size(); ++s) {
    double z = 0.0;
    for (std::size_t k = 0; k < classes; ++k) {
      z += std::exp(at.alpha[k] + at.beta * counts.count[s * classes + k]);
    }
    const std::size_t k = counts.label[s];
    sum += at.alpha[k] + at.beta * counts.count[s * classes + k] - std::log(z);
  }
  return sum;
}

// Pattern search: steps along the axes, halved when nothing is better.
LabelPrior brute_force(const NeighbourCounts& counts, bool with_beta) {
  LabelPrior best{std::vector<double>(static_cast<std::size_t>(counts.classes)), 0.5};
  double top = log_pseudo_likelihood(counts, best);
  for (double step = 0.5; step > 1e-6;) {
    bool better = false;
    for (std::size_t i = with_beta ? 0 : 1; i < best.alpha.size(); ++i) {
      for (const double sign : {-1.0, 1.0}) {
        LabelPrior other = best;
        (i == 0 ? other.beta : other.alpha[i]) += sign * step;
        const double value = log_pseudo_likelihood(counts, other);
        if (value <= top) continue;
        best = other;
        top = value;
        better = true;
      }
    }
    if (!better) step /= 2.0;
  }
  return best;
}

}  // namespace

TEST_CASE("the climb ends where an independent search does") {
  for (const int classes : {2, 3, 4}) {
    LabelPrior truth{{0.0, -0.6}, 0.8};
    for (int k = 2; k < classes; ++k) truth.alpha.push_back(0.3 * k);
    const NeighbourCounts counts = draw_counts(classes, truth, 2000);
    LabelPrior at{std::vector<double>(static_cast<std::size_t>(classes)), 0.1};
    for (int i = 0; i < 30; ++i) climb_pseudo_likelihood(counts, 1.0, 3.0, at);
    const LabelPrior best = brute_force(counts, true);
    CHECK(at.alpha[0] == 0.0);
    CHECK(at.beta == Approx(best.beta).margin(1e-3));
    CHECK(log_pseudo_likelihood(counts, at) >= log_pseudo_likelihood(counts, best) - 1e-9);
    for (std::size_t k = 1; k < at.alpha.size(); ++k) {
      CHECK(at.alpha[k] == Approx(best.alpha[k]).margin(1e-3));
      // 2000 pixels: standard errors are about 0.1.
      CHECK(at.alpha[k] == Approx(truth.alpha[k]).margin(0.5));
    }
    CHECK(at.beta == Approx(truth.beta).margin(0.25));
    // The gradient vanishes there.
    for (std::size_t i = 0; i < at.alpha.size(); ++i) {
      constexpr double kStep = 1e-4;
      LabelPrior up = at, down = at;
      (i == 0 ? up.beta : up.alpha[i]) += kStep;
      (i == 0 ? down.beta : down.alpha[i]) -= kStep;
      const double slope =
          (log_pseudo_likelihood(counts, up) - log_pseudo_likelihood(counts, down)) / (2 * kStep);
      CHECK(slope == Approx(0.0).margin(1e-3));
    }
  }
}

TEST_CASE("the class field alone climbs at a fixed coupling") {
  const NeighbourCounts counts = draw_counts(3, {{0.0, 0.7, -0.4}, 0.6}, 2000);
  LabelPrior at{{0.0, 0.0, 0.0}, 0.5};
  for (int i = 0; i < 30; ++i) climb_class_field(counts, 1.0, at);
  const LabelPrior best = brute_force(counts, false);
  CHECK(at.beta == 0.5);
  for (std::size_t k = 1; k < 3; ++k) CHECK(at.alpha[k] == Approx(best.alpha[k]).margin(1e-3));
}

TEST_CASE("steps are limited, and the coupling stays in its range") {
  // All neighbours agree: the likelihood has no maximum in beta.
  NeighbourCounts counts;
  counts.classes = 2;
  for (int s = 0; s < 1000; ++s) {
    const auto label = static_cast<std::uint8_t>(s % 2);
    counts.label.push_back(label);
    counts.count.insert(counts.count.end(), {label == 0 ? 4.0f : 0.0f, label == 1 ? 4.0f : 0.0f});
  }
  LabelPrior at{{0.0, 0.0}, 0.2};
  double last = at.beta;
  for (int i = 0; i < 40; ++i) {
    climb_pseudo_likelihood(counts, 1.0, 1.7, at);
    CHECK(at.beta - last <= 0.5 + 1e-12);
    last = at.beta;
  }
  CHECK(at.beta == 1.7);
  // Neighbours that never agree push the coupling to 0, not below.
  for (std::uint8_t& label : counts.label) label = static_cast<std::uint8_t>(1 - label);
  for (int i = 0; i < 40; ++i) climb_pseudo_likelihood(counts, 1.0, 1.7, at);
  CHECK(at.beta == 0.0);
}

TEST_CASE("one class only: the field stays finite") {
  NeighbourCounts counts;
  counts.classes = 2;
  counts.label.assign(500, 0);
  for (int s = 0; s < 500; ++s) counts.count.insert(counts.count.end(), {4.0f, 0.0f});
  LabelPrior at{{0.0, 0.0}, 0.5};
  for (int i = 0; i < 200; ++i) climb_pseudo_likelihood(counts, 1.0, 3.0, at);
  CHECK(std::isfinite(at.alpha[1]));
  CHECK(at.alpha[1] < 0.0);
  CHECK(std::isfinite(at.beta));
}
