#include "cli/light_options.h"

namespace stillfield {

void add_light_options(CLI::App& app, LightOptions& options) {
  app.add_option(
         "--flat-field", options.flat_field,
         "Image of an even surface in the same light: images are divided by it, scaled to a "
         "mean of one; several pages are averaged")
      ->type_name("FILE");
  app.add_option("--background", options.background,
                 "Image without light: subtracted from images and flat field first")
      ->type_name("FILE");
}

LightFiles light_files(const LightOptions& options) {
  LightFiles files;
  files.flat_field = options.flat_field;
  files.background = options.background;
  digest_light_files(files);
  return files;
}

}  // namespace stillfield
