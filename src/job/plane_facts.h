// What the record says about the noise and the pixels of one restored plane.
#ifndef STILLFIELD_JOB_PLANE_FACTS_H_
#define STILLFIELD_JOB_PLANE_FACTS_H_

#include "job/prepared_plane.h"
#include "job/restore_plane.h"

namespace stillfield {

// Fills the facts about noise and pixels, and adds warnings about the noise model to the notes and,
// where they put the intervals in doubt, to the sentences.
void describe_plane(const PreparedPlane& plane, const NoiseRequest& request, PlaneRestoration& out);

}  // namespace stillfield

#endif  // STILLFIELD_JOB_PLANE_FACTS_H_
