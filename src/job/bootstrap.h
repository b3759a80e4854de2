// Measurements corrected by a parametric bootstrap: what the analysis does to known truths tells
// what it did to the image.
//
// Why      posterior intervals count the scatter of the labels under the fitted field, not the
//          error of the field itself; on real shapes they are far too narrow (docs/trust.md)
// Truths   half of the replicates: the most probable labels without specks; half: draws from the
//          posterior, smoothed by a 3 x 3 majority (measure/label_cleaning.h). The first are
//          smoother than the scene, the second rougher
// Images   class means and noise as fitted, blurred as the sampling modelled it or, where it
//          modelled none, as the borders show (job/edge_blur.h)
// Value    T of a short run (job/short_run.h) of an image from given labels: area_fraction is the
//          mean over its sweeps, all else is measured on its most probable labels without specks
// Interval measure/bootstrap_interval.h, with a floor of one doubtful particle
//          (measure/one_particle.h)
// Left     as they were: measurements without an estimate, and those for which a kind of truth
//          gave fewer than two values
// Cost     one short run and one more a replicate, and twelve of half the length for the blur; on
//          images above kWholeRuns pixels fewer replicates and shorter runs
#ifndef STILLFIELD_JOB_BOOTSTRAP_H_
#define STILLFIELD_JOB_BOOTSTRAP_H_

#include <cstdint>
#include <vector>

#include "core/volume.h"
#include "job/label_sampling.h"
#include "job/observer.h"
#include "job/settings.h"
#include "measure/bootstrap_interval.h"
#include "measure/label_measures.h"
#include "measure/measurement.h"
#include "parallel/pool.h"
#include "report/record.h"

namespace stillfield {

inline constexpr std::int64_t kWholeRuns = 512 * 512;

struct BootstrapInput {
  const GreyLevels& grey;
  View<const float> pixels;         // NaN where nothing was observed
  View<const std::uint8_t> usable;  // empty: all pixels are
  const LabelMeasureSettings& measure;
  const SegmentSettings& settings;
  std::uint64_t image_seed = 0;
};

struct Bootstrap {
  BootstrapFacts facts;
  std::vector<MeasureKey> keys;
  std::vector<BootstrapErrors> errors;  // one a key
};

// `plain`: the measurements of the draws. The chains stand further on afterwards. Throws
// Error(kInterrupt) when the observer asks to stop.
Bootstrap run_bootstrap(const BootstrapInput& input, const Pool& pool, JobObserver& observer,
                        const std::vector<Measurement>& plain, LabelSampling& sampling);

// Corrects estimate, sd and bounds of those that the bootstrap knows, by name and class;
// plain_estimate keeps what the estimate was. Counts them in the facts.
void correct_measurements(Bootstrap& bootstrap, std::vector<Measurement>& measurements);

}  // namespace stillfield

#endif  // STILLFIELD_JOB_BOOTSTRAP_H_
