// One field from its file to its restored files.
//
// Writes   NAME.restored.tif (sample type of the input where it is an unsigned integer of at most
//          16 bits, else 32-bit floats), NAME.sd.tif, NAME.lower90.tif, NAME.upper90.tif (floats),
//          NAME.impulses.tif and NAME.draws.tif where there are any, NAME.restored.png (preview)
//          and, last, NAME.record.json
// Colour   red, green and blue are restored one by one, each with its own noise
// Errors   Error of any kind with one sentence that names the file; kInterrupt before anything is
//          written
#ifndef STILLFIELD_JOB_DENOISE_FIELD_H_
#define STILLFIELD_JOB_DENOISE_FIELD_H_

#include "job/denoise_settings.h"
#include "job/field_task.h"
#include "job/observer.h"
#include "job/settings.h"
#include "model/patch_mixture.h"
#include "parallel/pool.h"
#include "report/record.h"

namespace stillfield {

// `mixture`: learned from like images, or null to learn from each image itself.
ImageRecord denoise_field(const FieldTask& task, const DenoiseSettings& settings,
                          const RunSettings& run, const Pool& pool, JobObserver& observer,
                          const PatchMixture* mixture);

}  // namespace stillfield

#endif  // STILLFIELD_JOB_DENOISE_FIELD_H_
