// `stillfield segment`: labels with class probabilities and measurements.
#ifndef STILLFIELD_CLI_SEGMENT_H_
#define STILLFIELD_CLI_SEGMENT_H_

#include "cli/command.h"

namespace stillfield {

Command add_segment(CLI::App& app);

}  // namespace stillfield

#endif  // STILLFIELD_CLI_SEGMENT_H_
