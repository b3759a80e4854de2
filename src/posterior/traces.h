// Recorded scalars of a run: one value a block, chain and quantity.
#ifndef STILLFIELD_POSTERIOR_TRACES_H_
#define STILLFIELD_POSTERIOR_TRACES_H_

#include <string>
#include <vector>

#include "model/spline_surface.h"
#include "sampler/label_chain.h"

namespace stillfield {

struct Trace {
  std::string name;                         // area_fraction, class_mean, class_sd, ...
  int label = 0;                            // class 1..K; 0: the whole image
  std::vector<std::vector<double>> chains;  // [chain][draw]
};

class Traces {
 public:
  // `complete`: every pixel is observed. Otherwise fractions are those of the observed pixels and
  // equal_neighbours is left out: where nothing is seen, labels follow the prior, whose regions may
  // hold for thousands of sweeps, and that says nothing about what is measured.
  Traces(int classes, int chains, bool with_coupling, bool complete = true);

  // Adds the current state of one chain. Different chains may record at the same time.
  void record(int chain_number, const LabelChain& chain, const Neighbourhood& neighbourhood);

  // Records the light of shaded chains as well: at the centre and at the corners of the frame.
  void trace_light(const SurfaceBasis& basis);

  // Forgets everything recorded so far.
  void clear();

  std::size_t draws() const { return traces_.front().chains.front().size(); }
  const std::vector<Trace>& all() const { return traces_; }

 private:
  bool with_coupling_;
  bool complete_;
  const SurfaceBasis* light_ = nullptr;
  std::vector<Trace> traces_;
};

}  // namespace stillfield

#endif  // STILLFIELD_POSTERIOR_TRACES_H_
