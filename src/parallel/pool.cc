#include "parallel/pool.h"

#include <tbb/blocked_range.h>
#include <tbb/global_control.h>
#include <tbb/parallel_for.h>
#include <tbb/task_arena.h>

#include <optional>
#include <utility>

#include "core/error.h"

namespace stillfield {

struct Pool::Impl {
  // global_control both limits and permits: without it a 2-core machine never runs 4 threads.
  // One thread needs neither, and must not restrict other pools.
  Impl(int n, std::function<bool()> stop) : threads(n), stop_requested(std::move(stop)), arena(n) {
    if (n > 1) {
      allowed.emplace(tbb::global_control::max_allowed_parallelism, static_cast<std::size_t>(n));
    }
  }

  int threads;
  std::function<bool()> stop_requested;
  std::optional<tbb::global_control> allowed;
  tbb::task_arena arena;
  tbb::affinity_partitioner bands;  // remembers which thread had which band
};

Pool::Pool(int threads, std::function<bool()> stop_requested) {
  if (threads < 1) {
    throw Error(ErrorKind::kUsage, "the number of threads must be at least 1");
  }
  impl_ = std::make_unique<Impl>(threads, std::move(stop_requested));
}

Pool::~Pool() = default;

int Pool::threads() const {
  return impl_->threads;
}

void Pool::stop_if_requested() const {
  if (impl_->stop_requested && impl_->stop_requested()) {
    throw Error(ErrorKind::kInterrupt, "stopped on request");
  }
}

void Pool::for_bands(int n, int grain, const std::function<void(int, int)>& body) const {
  stop_if_requested();
  if (impl_->threads == 1 || n <= grain) {
    if (n > 0) body(0, n);
    return;
  }
  impl_->arena.execute([&] {
    tbb::parallel_for(
        tbb::blocked_range<int>(0, n, static_cast<std::size_t>(grain)),
        [&](const tbb::blocked_range<int>& r) { body(r.begin(), r.end()); }, impl_->bands);
  });
}

void Pool::for_each(int n, const std::function<void(int)>& body) const {
  stop_if_requested();
  if (impl_->threads == 1 || n <= 1) {
    for (int i = 0; i < n; ++i) body(i);
    return;
  }
  impl_->arena.execute([&] {
    tbb::parallel_for(
        tbb::blocked_range<int>(0, n, 1),
        [&](const tbb::blocked_range<int>& r) {
          for (int i = r.begin(); i < r.end(); ++i) body(i);
        },
        tbb::simple_partitioner{});
  });
}

}  // namespace stillfield
