// Further label draws from the posterior once sampling has ended, for what is too costly to do
// at every sweep: measurements, model checks.
//
// The chains go on from where they stopped, kBlocksBetweenDraws blocks of sweeps from draw to draw,
// and stand further on afterwards. The draws are the same for any number of threads.
#ifndef STILLFIELD_JOB_LABEL_DRAWS_H_
#define STILLFIELD_JOB_LABEL_DRAWS_H_

#include <cstdint>
#include <functional>

#include "core/volume.h"
#include "job/label_sampling.h"
#include "job/observer.h"
#include "job/settings.h"
#include "parallel/pool.h"

namespace stillfield {

inline constexpr int kBlocksBetweenDraws = 2;

struct LabelDraw {
  int chain = 0;
  int draw = 0;                     // of this chain, from 0
  View<const std::uint8_t> labels;  // row-major, 1..K
  const LabelModel& model;          // parameters drawn with them
};

// Calls visit for `draws` draws of every chain: those of one chain in order, those of different
// chains perhaps at the same time; it must not throw. Throws Error(kInterrupt) when the observer
// asks to stop.
void for_label_draws(const SegmentSettings& settings, int draws, const Pool& pool,
                     JobObserver& observer, LabelSampling& sampling,
                     const std::function<void(const LabelDraw&)>& visit);

}  // namespace stillfield

#endif  // STILLFIELD_JOB_LABEL_DRAWS_H_
