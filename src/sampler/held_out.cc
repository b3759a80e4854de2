#include "sampler/held_out.h"

#include <algorithm>

#include "core/elementary.h"

namespace stillfield {

HeldOut hold_out(const Colouring& c, PhiloxKey key, std::uint32_t fold, std::uint32_t folds,
                 int classes, GreyLevels& grey) {
  HeldOut held;
  for (const NeighbourRing& ring : c.neighbourhood().rings) {
    held.weight.insert(held.weight.end(), ring.neighbours.size(), ring.weight);
  }
  const auto hold = [&](int x, int y, int z) {
    const Site s = c.site(x, y, z);
    const LabelBand band = c.band(s.colour, s.slice);
    const std::size_t at = c.label_row(s.colour, s.slice, s.row) + c.byte_of(s.column);
    for (int r = 0; r < band.ring_count; ++r) {
      const Ring& ring = band.rings[static_cast<std::size_t>(r)];
      for (int i = 0; i < ring.neighbours; ++i) {
        held.neighbour.push_back(at + ring.offset[s.row & 1][i]);
      }
    }
  };
  const Extent e = grey.level.extent();
  for (int z = 0; z < e.depth; ++z) {
    for (int y = 0; y < e.height; ++y) {
      for (int x = 0; x < e.width; ++x) {
        std::uint16_t& level = grey.level.at(x, y, z);
        if (level == grey.missing()) continue;
        const std::uint32_t w =
            philox4x32({static_cast<std::uint32_t>(x), static_cast<std::uint32_t>(y),
                        static_cast<std::uint32_t>(z), counter_word3(Purpose::kHeldOut, 0, 0)},
                       key)[0];
        if (w % folds != fold) continue;
        hold(x, y, z);
        held.value.push_back(grey.value(level));
        level = grey.missing();
      }
    }
  }
  held.probability.resize(held.value.size() * static_cast<std::size_t>(classes));
  return held;
}

void predict_held_out(const LabelChain& chain, HeldOut& held) {
  const LabelPrior& prior = chain.model.prior;
  const std::size_t classes = prior.alpha.size();
  const std::size_t neighbours = held.weight.size();
  std::vector<double> p(classes);
  for (std::size_t s = 0; s < held.value.size(); ++s) {
    p = prior.alpha;
    for (std::size_t i = 0; i < neighbours; ++i) {
      const std::uint8_t k = chain.labels[held.neighbour[s * neighbours + i]];
      if (k < classes) p[k] += prior.beta * held.weight[i];
    }
    const double top = *std::max_element(p.begin(), p.end());
    double sum = 0.0;
    for (double& v : p) sum += v = exact_exp(v - top);
    for (std::size_t k = 0; k < classes; ++k) held.probability[s * classes + k] += p[k] / sum;
  }
  ++held.counted;
}

std::vector<double> take_log_densities(const GaussianClasses& model, HeldOut& held) {
  const std::size_t classes = model.mean.size();
  std::vector<double> log_density(held.value.size());
  for (std::size_t s = 0; s < held.value.size(); ++s) {
    double density = 0.0;
    for (std::size_t k = 0; k < classes; ++k) {
      const double d = (held.value[s] - model.mean[k]) / model.sd[k];
      const double p = held.probability[s * classes + k] / held.counted;
      density += p * exact_exp(-0.5 * d * d) / model.sd[k];
    }
    log_density[s] = exact_log(std::max(density, 1e-300));
  }
  std::fill(held.probability.begin(), held.probability.end(), 0.0);
  held.counted = 0;
  return log_density;
}

}  // namespace stillfield
