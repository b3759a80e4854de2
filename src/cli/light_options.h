// Options of photographed light, for segment and denoise.
#ifndef STILLFIELD_CLI_LIGHT_OPTIONS_H_
#define STILLFIELD_CLI_LIGHT_OPTIONS_H_

#include <CLI/CLI.hpp>
#include <string>

#include "job/light_files.h"

namespace stillfield {

struct LightOptions {
  std::string flat_field, background;
};

void add_light_options(CLI::App& app, LightOptions& options);

// With digests. Throws Error(kInput).
LightFiles light_files(const LightOptions& options);

}  // namespace stillfield

#endif  // STILLFIELD_CLI_LIGHT_OPTIONS_H_
