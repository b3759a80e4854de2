// One restoration by one mixture: random tilings, then passes of local groups, step by step.
#ifndef STILLFIELD_SAMPLER_PATCH_RUN_H_
#define STILLFIELD_SAMPLER_PATCH_RUN_H_

#include <cstdint>

#include "core/volume.h"
#include "model/patch_tables.h"
#include "parallel/pool.h"
#include "random/philox.h"
#include "sampler/patch_groups.h"
#include "sampler/patch_sums.h"
#include "sampler/pixel_redraw.h"

namespace stillfield {

class PatchRun {
 public:
  // value: in image units; the tables' noise. Keeps references to the pool and to redraw, which may
  // be null. Steps are numbered by the caller: random numbers belong to the number of the sweep.
  PatchRun(const Volume<float>& value, PatchTables tables, PhiloxKey key, const Pool& pool,
           PixelRedraw* redraw);

  void tiling(std::uint32_t sweep);
  void groups(std::uint32_t sweep, std::uint32_t pass, const GroupPass& settings);

  // Mean and variance of what the steps since the last pass have gathered, in image units.
  const IntensityMoments& moments();

  // The values of the last redraw; those given when nothing is redrawn.
  const Volume<float>& observed() const { return observed_; }

  // An image that deviates from the mean as a tiling does, scaled to the variance.
  Volume<float> draw(const IntensityMoments& about, std::uint32_t sweep) const;

 private:
  // Observed values anew, if they are redrawn, from the best estimate so far.
  void refresh();
  void scale();

  const Pool& pool_;
  PhiloxKey key_;
  PixelRedraw* redraw_;
  PatchTables tables_;
  Volume<float> observed_;
  Volume<float> scaled_;  // in noise units
  Volume<float> origin_;
  PatchSums sums_;
  IntensityMoments moments_;
  std::uint32_t sweep_ = 0;
  bool fresh_ = true;  // no step has been made
};

}  // namespace stillfield

#endif  // STILLFIELD_SAMPLER_PATCH_RUN_H_
