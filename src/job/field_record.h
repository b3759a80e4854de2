// The parts of a record that follow from a field and its posterior sample.
#ifndef STILLFIELD_JOB_FIELD_RECORD_H_
#define STILLFIELD_JOB_FIELD_RECORD_H_

#include <vector>

#include "job/label_sampling.h"
#include "model/grey_levels.h"
#include "report/record.h"

namespace stillfield {

// Its facts, and its notes beside those of the reader.
void describe_grey(const GreyLevels& grey, ImageRecord& record);

// Model, coupling, schedule, scalars, probability (without uncertain_share), verdict, measurements.
void describe_sampling(const LabelSampling& sampling, const SegmentSettings& settings,
                       ImageRecord& record);

// The light, with a note where it was modelled.
void describe_light(const ShadingFacts& light, ImageRecord& record);

// Adds what was measured on the draws, after describe_sampling. Area fractions stay those of the
// traces, which saw every sweep, if the field is complete; else those saw the observed pixels
// alone.
void describe_measured(const std::vector<Measurement>& measured, bool complete,
                       ImageRecord& record);

}  // namespace stillfield

#endif  // STILLFIELD_JOB_FIELD_RECORD_H_
