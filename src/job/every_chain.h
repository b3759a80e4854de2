// A piece of work on every chain: the chains side by side where one image is too small to keep two
// threads busy, otherwise one after the other, each on all threads and with the same planes.
#ifndef STILLFIELD_JOB_EVERY_CHAIN_H_
#define STILLFIELD_JOB_EVERY_CHAIN_H_

#include <functional>
#include <vector>

#include "core/extent.h"
#include "parallel/pool.h"
#include "sampler/label_chain.h"

namespace stillfield {

class EveryChain {
 public:
  // Keeps a reference to the pool.
  EveryChain(const Extent& extent, int chains, const Pool& pool);

  // work(chain, planes to prepare weights in, threads to use); it must not throw.
  void run(const std::function<void(int, WeightPlanes&, const Pool&)>& work);

 private:
  int chains_;
  const Pool& pool_;
  Pool serial_;
  bool side_by_side_;
  std::vector<WeightPlanes> weights_;
};

}  // namespace stillfield

#endif  // STILLFIELD_JOB_EVERY_CHAIN_H_
