// Measures every draw that is handed out, and summarises each measurement over the draws.
//
// Measured   what measure/label_measures.h lists, on the usable pixels; and each particle of the
//            most probable labels (measure/particle_table.h)
// Draws      kMeasuredDraws of each chain, as evenly spread over the run as label_draws.h gives
//            them: with 4 chains 200 in all, so that the Monte Carlo error of a posterior mean is
//            at most about sd / 14, and the 5 % quantile lies below ten draws
// Threads    different chains may be recorded at the same time, the same chain not
#ifndef STILLFIELD_JOB_MEASURED_DRAWS_H_
#define STILLFIELD_JOB_MEASURED_DRAWS_H_

#include <cstdint>
#include <vector>

#include "core/volume.h"
#include "job/label_draws.h"
#include "measure/label_measures.h"
#include "measure/measurement.h"
#include "measure/particle_table.h"

namespace stillfield {

inline constexpr int kMeasuredDraws = 50;  // a chain

class MeasuredDraws {
 public:
  // `grey`: NaN where nothing was observed. The planes must live as long as this does, but the
  // most probable labels; an empty `usable`: all pixels are.
  MeasuredDraws(View<const std::uint8_t> most_probable, View<const float> grey,
                View<const std::uint8_t> usable, const LabelMeasureSettings& settings, int chains);

  void record(const LabelDraw& draw);

  const std::vector<MeasureKey>& keys() const { return keys_; }
  // [key][chain][draw]; NaN where a draw has no such quantity.
  const std::vector<std::vector<std::vector<double>>>& traces() const { return traces_; }

  // One a key, in their order (measure/from_trace.h says what becomes of NaN). Call when all
  // chains have the same number of draws.
  std::vector<Measurement> measurements() const;
  std::vector<ParticleRow> particles() const;

 private:
  View<const float> grey_;
  View<const std::uint8_t> usable_;
  LabelMeasureSettings settings_;
  ParticleTable table_;
  std::vector<MeasureKey> keys_;
  std::vector<std::vector<std::vector<double>>> traces_;
};

}  // namespace stillfield

#endif  // STILLFIELD_JOB_MEASURED_DRAWS_H_
