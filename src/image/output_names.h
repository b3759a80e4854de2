// Unique output names for a list of inputs (the rules are in walk.h).
#ifndef STILLFIELD_IMAGE_OUTPUT_NAMES_H_
#define STILLFIELD_IMAGE_OUTPUT_NAMES_H_

#include <vector>

#include "image/walk.h"

namespace stillfield {

// Sets `output` of every file from its `relative`.
void assign_output_names(std::vector<InputFile>& files);

}  // namespace stillfield

#endif  // STILLFIELD_IMAGE_OUTPUT_NAMES_H_
