// Checks and verdict of a finished sample, into the record.
#ifndef STILLFIELD_JOB_MODEL_CHECKS_H_
#define STILLFIELD_JOB_MODEL_CHECKS_H_

#include "diagnose/predictive_checks.h"
#include "job/label_sampling.h"
#include "model/grey_levels.h"
#include "report/record.h"

namespace stillfield {

// `predictive` has seen its draws; record.model and record.probability are filled in.
// usable: the region of interest; empty: all of the image.
void describe_checks(const GreyLevels& grey, const Volume<std::uint8_t>& usable,
                     const LabelSampling& sampling, const PredictiveChecks& predictive,
                     ImageRecord& record);

}  // namespace stillfield

#endif  // STILLFIELD_JOB_MODEL_CHECKS_H_
