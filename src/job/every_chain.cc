#include "job/every_chain.h"

namespace stillfield {
namespace {

constexpr std::int64_t kRowParallelPixels = 320 * 320;

}  // namespace

EveryChain::EveryChain(const Extent& extent, int chains, const Pool& pool)
    : chains_(chains),
      pool_(pool),
      serial_(1),
      side_by_side_(extent.sites() < kRowParallelPixels && pool.threads() > 1),
      weights_(static_cast<std::size_t>(side_by_side_ ? chains : 1)) {}

void EveryChain::run(const std::function<void(int, WeightPlanes&, const Pool&)>& work) {
  if (side_by_side_) {
    pool_.for_each(chains_,
                   [&](int c) { work(c, weights_[static_cast<std::size_t>(c)], serial_); });
  } else {
    for (int c = 0; c < chains_; ++c) work(c, weights_.front(), pool_);
  }
}

}  // namespace stillfield
