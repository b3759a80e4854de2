// A synthetic noisy image of K grey phases, ready to be swept.
#ifndef STILLFIELD_TESTS_BENCH_FIELD_H_
#define STILLFIELD_TESTS_BENCH_FIELD_H_

#include "parallel/pool.h"
#include "sampler/sweep.h"

namespace stillfield::bench {

// size x size pixels of 256 levels: blocks of K phases, Gaussian noise of half the distance
// between neighbouring phases.
GreyLevels make_image(int size, int classes);
LabelModel make_model(int classes);

struct Field {
  Field(int size, int classes, Connectivity connectivity, const Pool& pool);
  Field(const Field&) = delete;
  Field& operator=(const Field&) = delete;

  double sites() const { return static_cast<double>(colouring.extent().sites()); }
  void sweep(int sweeps, bool counting, const Pool& pool);
  void empty_counts();
  // Bytes a sweep reads or writes: weights once; labels, and visits when counting, twice.
  double bytes_touched(bool counting) const;

  GreyLevels grey;
  Colouring colouring;
  ObservedField observed;
  WeightPlanes weights;
  LabelChain chain;
  AlignedBuffer<std::uint8_t> visits;  // lent to the chain while it counts
  AlignedBuffer<std::uint16_t> count;
};

}  // namespace stillfield::bench

#endif  // STILLFIELD_TESTS_BENCH_FIELD_H_
