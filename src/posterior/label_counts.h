// How often each pixel took each class, for each chain in two parts: marginal probabilities and
// the evidence that they are settled.
//
// Probability   p_k(s) = visits of class k over sweeps, all chains and parts together
// Parts         every chain is split into two parts of comparable length (sampler/schedule.h), so
//               that J = 2 x chains batches are at hand for each pixel, of lengths L_j, means p_j:
//   MCSE        of p: sqrt( J/(J-1) sum (L_j/L)^2 (p_j - p)^2 )    (batch means)
//   R-hat       sqrt( (W + B) / W ), W = sum (L_j/L) p_j (1 - p_j),
//               B = J/(J-1) sum (L_j/L) (p_j - p)^2                (split R-hat of the indicator)
// Memory        two 16-bit counts for each chain, pixel and class above the first
#ifndef STILLFIELD_POSTERIOR_LABEL_COUNTS_H_
#define STILLFIELD_POSTERIOR_LABEL_COUNTS_H_

#include <cstdint>
#include <vector>

#include "core/aligned_buffer.h"
#include "core/volume.h"
#include "parallel/pool.h"
#include "sampler/label_chain.h"

namespace stillfield {

inline constexpr int kMaxCountedSweeps = 65535;  // a part, from the 16-bit counts

struct ProbabilityQuality {
  double mcse = 0.0;         // root mean square over pixels, of the class where it is largest
  double worst_share = 0.0;  // share of pixels with R-hat above kPixelRhat for some class
};
inline constexpr double kPixelRhat = 1.05;

class LabelCounts {
 public:
  // The first part of each chain takes `first_part` sweeps.
  LabelCounts(const Colouring& colouring, int classes, int chains, int first_part);

  // Moves the chain's pending visits here. Different chains may do so at the same time.
  // Call at least every 255 sweeps, and before any of the results below.
  void take(int chain_number, LabelChain& chain);

  // After a look: once the second part is twice the first, they become the first together.
  void merge_parts();

  int sweeps() const;  // a chain
  // Of the pixels that `field` shows; of all without one.
  ProbabilityQuality quality(const Pool& pool, const ObservedField* field = nullptr) const;

  // Probability of one class (0-based), as float32.
  Volume<float> probability(int k) const;
  // Class of largest probability, 1-based; of equal ones the lowest.
  Volume<std::uint8_t> most_probable() const;
  // Entropy of the marginal distribution in bits, 0 .. log2 K.
  Volume<float> entropy() const;

 private:
  struct ChainCounts {
    AlignedBuffer<std::uint16_t> part[2];
    int sweeps[2] = {0, 0};
  };
  // Calls visit(x, y, z, n) with n[k] = visits of class k over all chains.
  template <class Visit>
  void for_each_pixel(const Visit& visit) const;

  const Colouring* colouring_;
  int classes_;
  int first_part_;
  std::vector<ChainCounts> chains_;
};

}  // namespace stillfield

#endif  // STILLFIELD_POSTERIOR_LABEL_COUNTS_H_
