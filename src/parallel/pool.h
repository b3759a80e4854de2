// The only door to threads: a pool of a fixed number of threads with two kinds of loop.
//
// Results never depend on the number of threads, because bodies write disjoint data and random
// numbers belong to pixels. Use one level of parallelism at a time: bands of rows inside one
// large image, or whole chains of a small one, never both (DEVELOPERS.md).
// Bodies must not throw; check inputs before the loop.
// A pool may know when to stop: then no loop begins any more, and Error(kInterrupt) is thrown where
// it would have. Work of many loops stops within one of them, wherever it is.
#ifndef STILLFIELD_PARALLEL_POOL_H_
#define STILLFIELD_PARALLEL_POOL_H_

#include <functional>
#include <memory>

namespace stillfield {

class Pool {
 public:
  // threads >= 1; more threads than cores are really started (the byte-equality tests need that).
  explicit Pool(int threads, std::function<bool()> stop_requested = {});
  ~Pool();
  Pool(const Pool&) = delete;
  Pool& operator=(const Pool&) = delete;

  int threads() const;

  // Calls body(first, last) for bands that cover [0, n). Repeated loops of the same size keep
  // bands on the cores that have their data. `grain` is the smallest band worth a task.
  void for_bands(int n, int grain, const std::function<void(int, int)>& body) const;

  // Calls body(i) for i in [0, n), one task each.
  void for_each(int n, const std::function<void(int)>& body) const;

 private:
  void stop_if_requested() const;

  struct Impl;
  std::unique_ptr<Impl> impl_;
};

}  // namespace stillfield

#endif  // STILLFIELD_PARALLEL_POOL_H_
