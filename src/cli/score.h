// stillfield score
#ifndef STILLFIELD_CLI_SCORE_H_
#define STILLFIELD_CLI_SCORE_H_

#include "cli/command.h"

namespace stillfield {

Command add_score(CLI::App& app);

}  // namespace stillfield

#endif  // STILLFIELD_CLI_SCORE_H_
