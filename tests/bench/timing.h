// Two clocks, and medians of repetitions.
#ifndef STILLFIELD_TESTS_BENCH_TIMING_H_
#define STILLFIELD_TESTS_BENCH_TIMING_H_

#include <algorithm>
#include <chrono>
#include <ctime>
#include <vector>

namespace stillfield::bench {

// Nanoseconds on the wall that work() takes.
template <class Work>
double wall_ns(const Work& work) {
  const auto start = std::chrono::steady_clock::now();
  work();
  return std::chrono::duration<double, std::nano>(std::chrono::steady_clock::now() - start).count();
}

// Nanoseconds this thread spends in work(): not disturbed by other programs taking turns on the
// core, but still by their use of caches and memory.
template <class Work>
double thread_ns(const Work& work) {
  const auto now = [] {
    std::timespec t{};
    clock_gettime(CLOCK_THREAD_CPUTIME_ID, &t);
    return 1e9 * static_cast<double>(t.tv_sec) + static_cast<double>(t.tv_nsec);
  };
  const double start = now();
  work();
  return now() - start;
}

inline double median(std::vector<double> x) {
  const auto middle = x.begin() + static_cast<std::ptrdiff_t>(x.size() / 2);
  std::nth_element(x.begin(), middle, x.end());
  return *middle;
}

}  // namespace stillfield::bench

#endif  // STILLFIELD_TESTS_BENCH_TIMING_H_
