// One field from its file to its files.
//
// Writes   NAME.labels.tif (classes 1..K), NAME.probability.tif (a page a class), NAME.entropy.tif
//          (bits), NAME.labels.png (preview) and, last, NAME.record.json: where it stands, the
//          others are complete
// Errors   Error of any kind with one sentence that names the file; kInterrupt before anything is
//          written
#ifndef STILLFIELD_JOB_SEGMENT_FIELD_H_
#define STILLFIELD_JOB_SEGMENT_FIELD_H_

#include "job/field_task.h"
#include "job/observer.h"
#include "job/settings.h"
#include "parallel/pool.h"
#include "report/record.h"
#include "sampler/path_sampling.h"

namespace stillfield {

// `memo` serves all fields of a run.
ImageRecord segment_field(const FieldTask& task, const SegmentSettings& settings,
                          const RunSettings& run, const Pool& pool, JobObserver& observer,
                          LogPartitionMemo& memo);

}  // namespace stillfield

#endif  // STILLFIELD_JOB_SEGMENT_FIELD_H_
