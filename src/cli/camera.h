// stillfield camera
#ifndef STILLFIELD_CLI_CAMERA_H_
#define STILLFIELD_CLI_CAMERA_H_

#include "cli/command.h"

namespace stillfield {

Command add_camera(CLI::App& app);

}  // namespace stillfield

#endif  // STILLFIELD_CLI_CAMERA_H_
