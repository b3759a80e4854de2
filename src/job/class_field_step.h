// One step of the class field towards the running labels of all chains, with falling gains.
#ifndef STILLFIELD_JOB_CLASS_FIELD_STEP_H_
#define STILLFIELD_JOB_CLASS_FIELD_STEP_H_

#include "job/label_sampling.h"

namespace stillfield {

// block: number of the step, from 0. All chains get the new class field.
void step_class_field(int block, LabelSampling& run);

}  // namespace stillfield

#endif  // STILLFIELD_JOB_CLASS_FIELD_STEP_H_
