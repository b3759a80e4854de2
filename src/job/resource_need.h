// What an image will need, before it is read: memory and, roughly, time.
//
// Memory   bytes = kProgramBytes + pixels x bytes a pixel. Measured as peak resident memory of the
//          program (docs/speed.md says on what, and how far off the estimate is); never meant to be
//          below the truth
// Time     seconds of the figures in docs/speed.md, for a machine like the one they were measured
//          on: an order of magnitude; a run's own finished images say more
#ifndef STILLFIELD_JOB_RESOURCE_NEED_H_
#define STILLFIELD_JOB_RESOURCE_NEED_H_

#include <cstdint>
#include <string>

#include "image/page_shape.h"
#include "job/denoise_settings.h"
#include "job/settings.h"

namespace stillfield {

struct ResourceNeed {
  double bytes = 0;
  double seconds = 0;
};

ResourceNeed need_of(const PageShape& shape, const SegmentSettings& settings, int threads);
ResourceNeed need_of(const PageShape& shape, const DenoiseSettings& settings, int threads);

// What this process can still get: free memory of the machine, or of the control group it runs in
// if that is less. A very large number where neither can be found out.
std::int64_t available_memory();

// "31.2 GB" (10^9 bytes), "12 MB".
std::string memory_text(double bytes);

// One sentence if `need` is more than `limit`; empty otherwise.
std::string memory_objection(const PageShape& shape, const ResourceNeed& need, std::int64_t limit);

}  // namespace stillfield

#endif  // STILLFIELD_JOB_RESOURCE_NEED_H_
