// stillfield denoise
#ifndef STILLFIELD_CLI_DENOISE_H_
#define STILLFIELD_CLI_DENOISE_H_

#include "cli/command.h"

namespace stillfield {

Command add_denoise(CLI::App& app);

}  // namespace stillfield

#endif  // STILLFIELD_CLI_DENOISE_H_
