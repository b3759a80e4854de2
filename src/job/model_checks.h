// Checks and verdict of a finished sample, into the record.
#ifndef STILLFIELD_JOB_MODEL_CHECKS_H_
#define STILLFIELD_JOB_MODEL_CHECKS_H_

#include "diagnose/predictive_checks.h"
#include "job/label_sampling.h"
#include "model/grey_levels.h"
#include "report/record.h"

namespace stillfield {

// Draws a chain that the checks ask for.
int draws_for_checks(int chains);

// `predictive` has seen its draws; record.model and record.probability are filled in.
void describe_checks(const GreyLevels& grey, const LabelSampling& sampling,
                     const PredictiveChecks& predictive, ImageRecord& record);

}  // namespace stillfield

#endif  // STILLFIELD_JOB_MODEL_CHECKS_H_
