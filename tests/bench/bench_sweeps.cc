// Speed of the label sweeps, as Markdown tables for docs/speed.md.
//
// Usage: bench_sweeps [--cpu-target NAME] [--quick] [--large] [--eight]
//   --quick   512² only, 3 repetitions     --large   also 8192² (needs 4 GB of memory)
//   --eight   8 neighbours instead of 4
#include <cstdio>
#include <cstring>
#include <exception>
#include <vector>

#include "bench/table.h"
#include "simd/target.h"

namespace {

using namespace stillfield;

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
                   "usage: bench_sweeps [--cpu-target NAME] [--quick] [--large] [--eight]\n");
      return 2;
    }
  }
  std::vector<int> sizes{512};
  if (!quick) sizes.insert(sizes.end(), {1024, 2048, 4096});
  if (large) sizes.push_back(8192);
  const int repetitions = quick ? 3 : 7;

  std::printf("CPU target %s; medians of %d interleaved repetitions.\n\n",
              active_cpu_target().c_str(), repetitions);
  bench::print_sweep_header();
  std::vector<bench::PassTimes> passes;
  for (const int size : sizes) {
    for (const int classes : {2, 3, 4, 8}) {
      passes.push_back(bench::measure(
          {size, classes, eight ? Connectivity::kEight : Connectivity::kFour, repetitions}));
    }
  }
  std::puts("\nOther passes over the image, 1 thread, ns a pixel:\n");
  bench::print_pass_header();
  for (const bench::PassTimes& p : passes) bench::print_pass_row(p);
  return 0;
}

}  // namespace

int main(int argc, char** argv) {
  try {
    return run(argc, argv);
  } catch (const std::exception& error) {
    std::fprintf(stderr, "%s\n", error.what());
    return 2;
  }
}
