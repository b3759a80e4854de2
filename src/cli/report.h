// stillfield report
#ifndef STILLFIELD_CLI_REPORT_H_
#define STILLFIELD_CLI_REPORT_H_

#include "cli/command.h"

namespace stillfield {

Command add_report(CLI::App& app);

}  // namespace stillfield

#endif  // STILLFIELD_CLI_REPORT_H_
