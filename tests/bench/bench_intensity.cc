// Speed of the sweeps of intensity fields, as Markdown tables for docs/speed.md.
//
// Usage: bench_intensity [--cpu-target NAME] [--quick] [--large] [--eight]
//   --quick   512² only, 3 repetitions     --large   also 8192²
//   --eight   8 neighbours instead of 4
// Columns  textbook: times the scalar loop of bench/intensity_textbook.h on 512²; normals: share of
//          the speed of drawing the same random numbers and turning them into normals alone;
//          bound: share of the slower of that and of streaming the planes a sweep touches
#include <algorithm>
#include <cstdio>
#include <cstring>
#include <exception>
#include <vector>

#include "bench/intensity_textbook.h"
#include "bench/timing.h"
#include "random/stream.h"
#include "sampler/intensity_chain.h"
#include "simd/normals.h"
#include "simd/target.h"

namespace stillfield::bench {
namespace {

constexpr int kTextbookSize = 512;
constexpr double kStrength = 1e-3, kNoiseVariance = 400.0;

Volume<float> make_image(int size) {
  Volume<float> image({size, size});
  RandomStream random({1, 2}, Purpose::kSimulation);
  for (int y = 0; y < size; ++y) {
    for (int x = 0; x < size; ++x) {
      image.at(x, y) = static_cast<float>((x / 37 + y / 53) % 3 * 60 + 20.0 * random.normal());
    }
  }
  return image;
}

Volume<float> constant(int size, double value) {
  Volume<float> image({size, size});
  for (int y = 0; y < size; ++y) {
    for (int x = 0; x < size; ++x) image.at(x, y) = static_cast<float>(value);
  }
  return image;
}

// The random numbers of one sweep, as normals, into rows that stay in the cache.
void draw_normals(const IntensityLayout& layout, std::uint32_t sweep) {
  constexpr int kColumns = 512;
  alignas(64) static float even[kColumns], odd[kColumns];
  const Colouring& c = layout.colouring();
  for (int colour = 0; colour < c.colours(); ++colour) {
    RandomPlane plane{{1, 2}, sweep, counter_word3(Purpose::kIntensity, colour, 0), 0, 0};
    for (int pair = 0; pair < (c.rows(colour) + 1) / 2; ++pair) {
      for (int first = 0; first < layout.columns(); first += kColumns) {
        plane.first_column = static_cast<std::uint32_t>(first);
        normal_row_pair(plane, static_cast<std::uint32_t>(pair),
                        std::min(kColumns, layout.columns() - first), even, odd);
      }
    }
  }
}

// Reads one plane; reads and writes back others.
void stream(const AlignedBuffer<float>& read, std::vector<AlignedBuffer<float>*> written) {
  const auto add = [](const float* p, std::size_t n) {
    std::uint64_t sum[4] = {};
    for (std::size_t i = 0; i + 8 <= n; i += 8) {
      std::uint64_t w[4];
      std::memcpy(w, p + i, 32);
      for (int j = 0; j < 4; ++j) sum[j] += w[j];
    }
    volatile std::uint64_t keep = sum[0] ^ sum[1] ^ sum[2] ^ sum[3];
    (void)keep;
  };
  static volatile std::uint32_t zero = 0;
  add(read.data(), read.size());
  for (AlignedBuffer<float>* plane : written) {
    const std::uint32_t change = zero;
    for (float& x : *plane) {
      std::uint32_t bits;
      std::memcpy(&bits, &x, 4);
      bits ^= change;
      std::memcpy(&x, &bits, 4);
    }
  }
}

void measure(int size, Connectivity connectivity, IntensityPrior prior, int repetitions) {
  const Pool one(1), two(2);
  const Volume<float> value = make_image(size), variance = constant(size, kNoiseVariance);
  const IntensityLayout layout({size, size}, make_neighbourhood(connectivity));
  const ObservedIntensity observed = observe_intensity(layout, value.view(), variance.view());
  const double strength = prior == IntensityPrior::kSmooth ? kStrength : 0.05;
  IntensityChain chain =
      start_intensity_chain(observed, prior, {1, 2}, value.view(), strength, 1.0);
  AlignedBuffer<float> sum(layout.elements()), square(layout.elements());
  std::vector<float> book_value;
  const Volume<float> book_image = make_image(kTextbookSize);
  for (int y = 0; y < kTextbookSize; ++y) {
    book_value.insert(book_value.end(), book_image.row(y), book_image.row(y) + kTextbookSize);
  }
  IntensityTextbook textbook(kTextbookSize, kTextbookSize, book_value, kStrength, kNoiseVariance);
  const double n = static_cast<double>(size) * size;
  const int sweeps = std::clamp(static_cast<int>(2e7 / n), 2, 80);
  const auto swap_moments = [&](bool moments) {
    if (!moments) return;
    std::swap(chain.sum, sum);
    std::swap(chain.square, square);
  };
  const auto run = [&](int count, const Pool& pool) {
    for (int s = 0; s < count; ++s) sweep_intensity(observed, prior, observed.value, pool, chain);
  };
  std::vector<double> book, normals, sums, memory[2], cpu[2], wall[2], wall_two[2];
  textbook.sweep();
  run(2, one);
  for (int rep = 0; rep < repetitions; ++rep) {
    book.push_back(thread_ns([&] { textbook.sweep(); }) / textbook.sites());
    normals.push_back(thread_ns([&] {
                        for (int s = 0; s < sweeps; ++s) {
                          draw_normals(layout, static_cast<std::uint32_t>(s));
                        }
                      }) /
                      sweeps / n);
    sums.push_back(thread_ns([&] {
                     for (int s = 0; s < sweeps; ++s) {
                       sum_differences(observed, prior, one, chain);
                       sum_residuals(observed, prior, one, chain);
                     }
                   }) /
                   sweeps / n);
    for (const bool moments : {false, true}) {
      std::vector<AlignedBuffer<float>*> written{&chain.field};
      if (moments) written.insert(written.end(), {&sum, &square});
      memory[moments].push_back(thread_ns([&] { stream(observed.value, written); }) / n);
      swap_moments(moments);
      run(1, one);
      double spent = 0.0;
      wall[moments].push_back(wall_ns([&] { spent = thread_ns([&] { run(sweeps, one); }); }) /
                              sweeps / n);
      cpu[moments].push_back(spent / sweeps / n);
      run(1, two);
      wall_two[moments].push_back(wall_ns([&] { run(sweeps, two); }) / sweeps / n);
      swap_moments(moments);
    }
  }
  for (const bool moments : {false, true}) {
    const double mine = median(cpu[moments]);
    const double bound = std::max(median(normals), median(memory[moments]));
    std::printf("| %s | %d² | %d | %s | %.2f | %.0f× | %.2f | %.2f (%s) | %.2f× | %.2f |\n",
                prior == IntensityPrior::kSmooth ? "smooth" : "edges", size,
                static_cast<int>(connectivity), moments ? "yes" : "no", 1.0 / mine,
                median(book) / mine, median(normals) / mine, bound / mine,
                bound > median(normals) ? "memory" : "normals",
                median(wall[moments]) / median(wall_two[moments]), median(sums));
    std::fflush(stdout);
  }
  if (size == kTextbookSize) {
    std::fprintf(stderr, "textbook %.4f, random numbers and normals alone %.2f a ns\n",
                 1.0 / median(book), 1.0 / median(normals));
  }
}

int run(int argc, char** argv) {
  bool quick = false, large = false, eight = false;
  for (int i = 1; i < argc; ++i) {
    if (std::strcmp(argv[i], "--quick") == 0) {
      quick = true;
    } else if (std::strcmp(argv[i], "--large") == 0) {
      large = true;
    } else if (std::strcmp(argv[i], "--eight") == 0) {
      eight = true;
    } else if (std::strcmp(argv[i], "--cpu-target") == 0 && i + 1 < argc) {
      force_cpu_target(argv[++i]);
    } else {
      std::fprintf(stderr,
                   "usage: bench_intensity [--cpu-target NAME] [--quick] [--large] [--eight]\n");
      return 2;
    }
  }
  std::vector<int> sizes{512};
  if (!quick) sizes.insert(sizes.end(), {1024, 2048, 4096});
  if (large) sizes.push_back(8192);
  const int repetitions = quick ? 3 : 7;
  std::printf("CPU target %s; medians of %d interleaved repetitions.\n\n",
              active_cpu_target().c_str(), repetitions);
  std::puts(
      "| prior | image | neighbours | moments | sites/ns, 1 thread | textbook | normals | bound "
      "| speed-up, 2 threads | sums, ns a site |\n"
      "|---|---|---|---|---|---|---|---|---|---|");
  for (const IntensityPrior prior : {IntensityPrior::kSmooth, IntensityPrior::kEdges}) {
    for (const int size : sizes) {
      measure(size, eight ? Connectivity::kEight : Connectivity::kFour, prior, repetitions);
    }
  }
  return 0;
}

}  // namespace
}  // namespace stillfield::bench

int main(int argc, char** argv) {
  try {
    return stillfield::bench::run(argc, argv);
  } catch (const std::exception& error) {
    std::fprintf(stderr, "%s\n", error.what());
    return 2;
  }
}
