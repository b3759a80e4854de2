// ln Z of a Potts field without class field, and draws of its coupling.
//
// Maths    d ln Z / d beta = E_beta[S],  S = sum over pairs of w_st [z_s = z_t], so
//          ln Z(beta) - ln Z(0) = integral of E_b[S] over b in [0, beta]
//          (path sampling: Gelman & Meng 1998; for label fields Green & Richardson 2002)
// Method   E_b[S] on a grid of couplings by Gibbs sweeps of the very lattice, once from a random
//          field upwards and once from a uniform field downwards; their mean is used and their
//          largest difference reported (hysteresis at a first-order transition, K > 4). Lattices
//          above 256 pixels on a side are taken as cells of 256 with the pairs of the larger one.
// Draw     p(beta | z) prop. to exp(beta S(z) - ln Z(beta)) on [0, max_beta], a flat prior; exact
//          up to the grid, by inversion.
#ifndef STILLFIELD_SAMPLER_PATH_SAMPLING_H_
#define STILLFIELD_SAMPLER_PATH_SAMPLING_H_

#include <cstdint>
#include <deque>
#include <vector>

#include "core/extent.h"
#include "model/neighbourhood.h"
#include "parallel/pool.h"
#include "random/stream.h"

namespace stillfield {

struct LogPartition {
  std::vector<double> beta;        // rising, from 0
  std::vector<double> mean_pairs;  // E_beta[S]
  std::vector<double> log_z;       // ln Z(beta) - ln Z(0)
  double hysteresis = 0.0;         // largest |up - down| of E[S], per pair

  double max_beta() const { return beta.back(); }
  // Linear between grid points for E[S], its exact integral for ln Z.
  double log_z_at(double b) const;
};

// Couplings beyond this order the field completely; the grid ends there.
double max_coupling(const Neighbourhood& neighbourhood, int classes);

// Coupling of the square lattice's transition, ln(1 + sqrt K) for 4 neighbours (Potts 1952;
// Beffara & Duminil-Copin 2012); for other neighbourhoods scaled by the neighbours' weights, a
// rule of thumb that only sets where the grid is dense.
double transition_coupling(const Neighbourhood& neighbourhood, int classes);

LogPartition integrate_log_partition(Extent extent, const Neighbourhood& neighbourhood, int classes,
                                     std::uint64_t seed, const Pool& pool,
                                     int sweeps_a_point = 200);

// Integrals already computed, by size, neighbourhood and classes: the images of a folder share
// them.
class LogPartitionMemo {
 public:
  // The reference holds as long as the memo.
  const LogPartition& get(Extent extent, const Neighbourhood& neighbourhood, int classes,
                          std::uint64_t seed, const Pool& pool);

 private:
  struct Entry {
    Extent extent;
    Connectivity connectivity;
    double total_weight;  // tells spacings apart
    int classes;
    std::uint64_t seed;
    LogPartition value;
  };
  std::deque<Entry> entries_;
};

// One draw of beta given S(z).
double draw_coupling(const LogPartition& log_partition, double weighted_pairs,
                     RandomStream& random);

}  // namespace stillfield

#endif  // STILLFIELD_SAMPLER_PATH_SAMPLING_H_
