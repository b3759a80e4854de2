// `stillfield info`: version, CPU targets, libraries, formats.
#ifndef STILLFIELD_CLI_INFO_H_
#define STILLFIELD_CLI_INFO_H_

#include "cli/command.h"

namespace stillfield {

Command add_info(CLI::App& app);

}  // namespace stillfield

#endif  // STILLFIELD_CLI_INFO_H_
