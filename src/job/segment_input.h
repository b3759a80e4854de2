// One page as `segment` takes it: pixels, region of interest, grey levels, and how to measure.
#ifndef STILLFIELD_JOB_SEGMENT_INPUT_H_
#define STILLFIELD_JOB_SEGMENT_INPUT_H_

#include <cstdint>

#include "core/volume.h"
#include "image/write.h"
#include "job/field_task.h"
#include "job/settings.h"
#include "measure/label_measures.h"
#include "model/grey_levels.h"
#include "report/record.h"

namespace stillfield {

struct SegmentInput {
  Volume<float> pixels;         // NaN where missing, or outside the region of interest
  Volume<std::uint8_t> usable;  // empty without --mask; 1 within
  GreyLevels grey;
  LabelMeasureSettings measure;
  TiffOptions options;  // of the maps
  std::uint64_t seed = 0;

  // Every pixel is observed.
  bool complete() const { return grey.observed == pixels.extent().sites(); }
};

// Reads page and mask and begins the record. A pixel size of the settings overrides the file's.
// Throws Error(kInput).
SegmentInput read_segment_input(const FieldTask& task, const SegmentSettings& settings,
                                const ReadLimits& limits, ImageRecord& record);

}  // namespace stillfield

#endif  // STILLFIELD_JOB_SEGMENT_INPUT_H_
