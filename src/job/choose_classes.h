// `--classes auto`: the number of classes of one image, before it is segmented.
//
// Criterion  sampler/class_search.h, on the image as model/search_image.h makes it small
// One class  where one class explains the image as well as any number, two are used, because a
//            segmentation needs them, and a sentence says that they may be noise
#ifndef STILLFIELD_JOB_CHOOSE_CLASSES_H_
#define STILLFIELD_JOB_CHOOSE_CLASSES_H_

#include <cstdint>

#include "job/settings.h"
#include "model/grey_levels.h"
#include "parallel/pool.h"
#include "report/record.h"

namespace stillfield {

inline constexpr int kMostAutoClasses = 8;

// `settings` with the number of classes to use: unchanged unless it is kAutoClasses. What was tried
// goes into record.class_choice.
SegmentSettings with_chosen_classes(const GreyLevels& grey, const SegmentSettings& settings,
                                    std::uint64_t image_seed, const Pool& pool,
                                    ImageRecord& record);

// Adds what the user should know of the choice to the sentences of the record's verdict.
void add_choice_sentences(ImageRecord& record);

}  // namespace stillfield

#endif  // STILLFIELD_JOB_CHOOSE_CLASSES_H_
