#include "job/label_draws.h"

#include <vector>

#include "core/error.h"
#include "job/every_chain.h"
#include "sampler/blurred_chain.h"

namespace stillfield {
namespace {

// In image order and counted from 1.
void image_labels(const Colouring& colouring, const AlignedBuffer<std::uint8_t>& split,
                  Volume<std::uint8_t>& labels) {
  gather_labels(colouring, split, labels.view());
  for (int z = 0; z < labels.depth(); ++z) {
    for (int y = 0; y < labels.height(); ++y) {
      for (int x = 0; x < labels.width(); ++x) ++labels.at(x, y, z);
    }
  }
}

}  // namespace

void for_label_draws(const SegmentSettings& settings, int draws, const Pool& pool,
                     JobObserver& observer, LabelSampling& sampling,
                     const std::function<void(const LabelDraw&)>& visit) {
  const Colouring& colouring = *sampling.colouring;
  const int chains = static_cast<int>(sampling.chains.size());
  std::vector<Volume<std::uint8_t>> labels;
  for (int c = 0; c < chains; ++c) labels.emplace_back(colouring.extent());
  EveryChain every_chain(colouring.extent(), chains, pool);
  for (int draw = 0; draw < draws; ++draw) {
    if (observer.stop_requested()) throw Error(ErrorKind::kInterrupt, "stopped on request");
    every_chain.run([&](int c, WeightPlanes& weights, const Pool& inner) {
      LabelChain& chain = sampling.chains[static_cast<std::size_t>(c)];
      for (int block = 0; block < kBlocksBetweenDraws; ++block) {
        if (sampling.shading) {
          advance_shaded_chain(sampling.problem, *sampling.shading,
                               settings.schedule.sweeps_a_block, inner, weights, chain);
        } else if (sampling.blurred.empty()) {
          advance_chain(sampling.problem, settings.schedule.sweeps_a_block, inner, weights, chain);
        } else {
          advance_blurred_chain(sampling.problem, settings.schedule.sweeps_a_block, inner,
                                sampling.blurred[static_cast<std::size_t>(c)], chain);
        }
      }
      image_labels(colouring, chain.labels, labels[static_cast<std::size_t>(c)]);
    });
    // A visit is serial work on one draw: the draws of all chains side by side.
    pool.for_each(chains, [&](int c) {
      const auto i = static_cast<std::size_t>(c);
      visit({c, draw, labels[i].view(), sampling.chains[i].model});
    });
  }
}

}  // namespace stillfield
