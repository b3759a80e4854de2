// Label counts against plain bookkeeping of the same visits.
#include "posterior/label_counts.h"

#include <algorithm>
#include <catch2/catch.hpp>
#include <cmath>

#include "random/stream.h"

using namespace stillfield;

namespace {

// Chains whose visits are drawn here: independent labels with known probabilities.
struct Simulated {
  Simulated(Extent extent, Connectivity connectivity, int class_count, int chain_count, int first)
      : colouring(extent, make_neighbourhood(connectivity)),
        classes(class_count),
        counts(colouring, class_count, chain_count, first),
        random(chain_key(31, 0), Purpose::kSimulation),
        visits(static_cast<std::size_t>(chain_count),
               std::vector<int>(static_cast<std::size_t>(extent.sites()) *
                                static_cast<std::size_t>(class_count))),
        chains(static_cast<std::size_t>(chain_count)) {
    for (LabelChain& chain : chains) {
      chain.visits = AlignedBuffer<std::uint8_t>(colouring.plane_elements() *
                                                 static_cast<std::size_t>(class_count - 1));
    }
  }

  // One sweep of chain c: label(pixel, uniform) for every pixel.
  template <class Label>
  void sweep(int c, const Label& label) {
    const Extent e = colouring.extent();
    LabelChain& chain = chains[static_cast<std::size_t>(c)];
    for (int z = 0; z < e.depth; ++z) {
      for (int y = 0; y < e.height; ++y) {
        for (int x = 0; x < e.width; ++x) {
          const int pixel = (z * e.height + y) * e.width + x;
          const int k = label(pixel, random.uniform());
          ++visits[static_cast<std::size_t>(c)][static_cast<std::size_t>(pixel * classes + k)];
          if (k == 0) continue;
          const Site s = colouring.site(x, y, z);
          ++chain.visits[static_cast<std::size_t>(k - 1) * colouring.plane_elements() +
                         colouring.plane_row(s.colour, s.slice, s.row) +
                         colouring.byte_of(s.column)];
        }
      }
    }
    ++chain.visits_pending;
  }

  void take_all() {
    for (std::size_t c = 0; c < chains.size(); ++c) counts.take(static_cast<int>(c), chains[c]);
  }

  int total(int pixel, int k) const {
    int sum = 0;
    for (const auto& v : visits) sum += v[static_cast<std::size_t>(pixel * classes + k)];
    return sum;
  }

  Colouring colouring;
  int classes;
  LabelCounts counts;
  RandomStream random;
  std::vector<std::vector<int>> visits;  // [chain][pixel * classes + k]
  std::vector<LabelChain> chains;
};

int pick(double u, int classes) {
  return std::min(static_cast<int>(u * u * classes), classes - 1);
}

double entropy_bits(const std::vector<double>& p) {
  double bits = 0.0;
  for (const double v : p) bits -= v > 0.0 ? v * std::log2(v) : 0.0;
  return bits;
}

}  // namespace

TEST_CASE("probabilities, most probable labels and entropies are those of the visits") {
  struct Case {
    Extent extent;
    Connectivity connectivity;
    int classes;
  };
  for (const Case& c : {Case{{1, 1, 1}, Connectivity::kFour, 2},
                        {{33, 7, 1}, Connectivity::kFour, 3},
                        {{130, 5, 1}, Connectivity::kEight, 4},
                        {{6, 5, 3}, Connectivity::kSix, 2},
                        {{7, 4, 3}, Connectivity::kTwentySix, 9}}) {
    CAPTURE(c.extent.width, c.extent.depth, c.classes);
    Simulated s(c.extent, c.connectivity, c.classes, 3, 8);
    for (int sweep = 0; sweep < 24; ++sweep) {
      for (int chain = 0; chain < 3; ++chain) {
        s.sweep(chain, [&](int, double u) { return pick(u, c.classes); });
      }
      if (sweep % 8 == 7) s.take_all();
    }
    CHECK(s.counts.sweeps() == 24);
    for (int merged = 0; merged < 2; ++merged) {
      const Volume<std::uint8_t> most = s.counts.most_probable();
      const Volume<float> entropy = s.counts.entropy();
      std::vector<Volume<float>> probability;
      for (int k = 0; k < c.classes; ++k) probability.push_back(s.counts.probability(k));
      bool right = true;
      for (int pixel = 0; pixel < c.extent.sites(); ++pixel) {
        const int x = pixel % c.extent.width;
        const int y = pixel / c.extent.width % c.extent.height;
        const int z = pixel / c.extent.width / c.extent.height;
        std::vector<double> p;
        int best = 0;
        for (int k = 0; k < c.classes; ++k) {
          p.push_back(s.total(pixel, k) / 72.0);
          right = right && probability[static_cast<std::size_t>(k)].at(x, y, z) ==
                               static_cast<float>(p.back());
          if (s.total(pixel, k) > s.total(pixel, best)) best = k;  // of equal ones the lowest
        }
        right = right && most.at(x, y, z) == best + 1;
        right = right && std::fabs(entropy.at(x, y, z) - entropy_bits(p)) < 1e-6;
      }
      CHECK(right);
      s.counts.merge_parts();  // 16 sweeps against 8: merging changes no result
    }
  }
}

TEST_CASE("entropies of certain and of evenly split pixels are 0 and log2 K") {
  for (const int classes : {2, 4, 8}) {
    Simulated s({2, 1}, Connectivity::kFour, classes, 1, 8);
    for (int sweep = 0; sweep < 16; ++sweep) {
      s.sweep(0, [&](int pixel, double) { return pixel == 0 ? classes - 1 : sweep % classes; });
    }
    s.take_all();
    CHECK(s.counts.entropy().at(0, 0) == 0.0f);
    CHECK(s.counts.entropy().at(1, 0) == Approx(std::log2(classes)));
    CHECK(s.counts.most_probable().at(0, 0) == classes);
    CHECK(s.counts.most_probable().at(1, 0) == 1);
    CHECK(s.counts.probability(0).at(0, 0) == 0.0f);
  }
}

TEST_CASE("the standard error is that of batch means over parts") {
  // 2 chains x 2 parts of 8 and 16 sweeps, by the formula in the header.
  constexpr int kPixels = 30;
  Simulated s({kPixels, 1}, Connectivity::kFour, 3, 2, 8);
  std::vector<std::vector<int>> first;
  for (int sweep = 0; sweep < 24; ++sweep) {
    for (int chain = 0; chain < 2; ++chain)
      s.sweep(chain, [](int, double u) { return pick(u, 3); });
    if (sweep == 7) first = s.visits;
    if (sweep == 7 || sweep == 15) s.take_all();
  }
  s.take_all();
  double largest = 0.0;
  std::vector<bool> bad(kPixels);
  for (int k = 1; k < 3; ++k) {
    double variance = 0.0;
    for (int pixel = 0; pixel < kPixels; ++pixel) {
      const auto at = static_cast<std::size_t>(pixel * 3 + k);
      const double p = s.total(pixel, k) / 48.0;
      double within = 0.0, between = 0.0;
      for (std::size_t chain = 0; chain < 2; ++chain) {
        const double means[2] = {first[chain][at] / 8.0,
                                 (s.visits[chain][at] - first[chain][at]) / 16.0};
        const double share[2] = {8.0 / 48.0, 16.0 / 48.0};
        for (std::size_t part = 0; part < 2; ++part) {
          const double off = means[part] - p;
          variance += 4.0 / 3.0 * share[part] * share[part] * off * off;
          within += share[part] * means[part] * (1.0 - means[part]);
          between += 4.0 / 3.0 * share[part] * off * off;
        }
      }
      if (within > 0.0 || between > 0.0) {
        const double rhat = std::sqrt((within + between) / within);
        if (rhat > kPixelRhat) bad[static_cast<std::size_t>(pixel)] = true;
      }
    }
    largest = std::max(largest, variance / kPixels);
  }
  const ProbabilityQuality quality = s.counts.quality(Pool(1));
  CHECK(quality.mcse == Approx(std::sqrt(largest)));
  CHECK(quality.worst_share ==
        Approx(static_cast<double>(std::count(bad.begin(), bad.end(), true)) / kPixels));
}

TEST_CASE("on independent draws the standard error is the binomial one") {
  // E[mcse^2] = p (1 - p) / n for independent draws and batches of equal length; averaged over 900
  // pixels of J = 8 batches its relative error is sqrt(2 / 7 / 900) = 1.8 %: 4 of them allowed.
  Simulated s({30, 30}, Connectivity::kEight, 2, 4, 96);
  for (int sweep = 0; sweep < 192; ++sweep) {
    for (int chain = 0; chain < 4; ++chain) s.sweep(chain, [](int, double u) { return u < 0.3; });
    if (sweep == 95) s.take_all();
  }
  s.take_all();
  const ProbabilityQuality quality = s.counts.quality(Pool(1));
  const double exact = 0.3 * 0.7 / (4 * 192);
  CHECK(quality.mcse * quality.mcse == Approx(exact).epsilon(4 * 0.018));
  CHECK(quality.worst_share < 0.05);
  const ProbabilityQuality threads = s.counts.quality(Pool(2));
  CHECK(threads.mcse == quality.mcse);  // to the bit
  CHECK(threads.worst_share == quality.worst_share);
}

TEST_CASE("chains that disagree are seen, pixels that never move are not held against them") {
  Simulated s({40, 1}, Connectivity::kFour, 2, 4, 16);
  for (int sweep = 0; sweep < 32; ++sweep) {
    for (int chain = 0; chain < 4; ++chain) {
      // Pixels 0-9: chain 3 sees another label. 10-39: everyone always sees label 1.
      s.sweep(chain, [chain](int pixel, double) { return pixel < 10 ? chain == 3 : 1; });
    }
    if (sweep == 15) s.take_all();
  }
  s.take_all();
  const ProbabilityQuality quality = s.counts.quality(Pool(1));
  CHECK(quality.worst_share == Approx(0.25));
  CHECK(quality.mcse > 0.05);
}

TEST_CASE("one batch alone says nothing about quality") {
  Simulated s({4, 4}, Connectivity::kFour, 2, 1, 16);
  for (int sweep = 0; sweep < 8; ++sweep) s.sweep(0, [](int, double u) { return u < 0.5; });
  s.take_all();
  CHECK(s.counts.quality(Pool(1)).mcse == 0.0);
}

TEST_CASE("counts keep 16 bits: a part of 65535 sweeps does not overflow") {
  Simulated s({1, 1}, Connectivity::kFour, 2, 1, kMaxCountedSweeps);
  while (s.counts.sweeps() < kMaxCountedSweeps) {
    for (int i = 0; i < 255; ++i) s.sweep(0, [](int, double) { return 1; });
    s.take_all();
  }
  CHECK(s.counts.sweeps() == kMaxCountedSweeps);  // 257 x 255
  CHECK(s.counts.probability(1).at(0, 0) == 1.0f);
}
