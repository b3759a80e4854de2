// The only door to threads: a pool of a fixed number of threads with two kinds of loop.
//
// Results never depend on the number of threads, because bodies write disjoint data and random
// numbers belong to pixels. Use one level of parallelism at a time: bands of rows inside one
// large image, or whole chains of a small one, never both (DEVELOPERS.md).
// Bodies must not throw; check inputs before the loop.
#ifndef STILLFIELD_PARALLEL_POOL_H_
#define STILLFIELD_PARALLEL_POOL_H_

#include <functional>
#include <memory>

namespace stillfield {

class Pool {
 public:
  // threads >= 1; more threads than cores are really started (the byte-equality tests need that).
  explicit Pool(int threads);
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
  struct Impl;
  std::unique_ptr<Impl> impl_;
};

}  // namespace stillfield

#endif  // STILLFIELD_PARALLEL_POOL_H_
