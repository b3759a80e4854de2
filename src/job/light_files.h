// Uneven light that was photographed: a flat field and a background, taken off before analysis.
//
// Maths    corrected = (y - background) / f,  f = (flat field - background) / its mean: grey values
//          stay those of the file but for the background. A file of several pages stands for their
//          mean. Colour planes are all corrected with the luminance of the files
#ifndef STILLFIELD_JOB_LIGHT_FILES_H_
#define STILLFIELD_JOB_LIGHT_FILES_H_

#include <filesystem>
#include <string>
#include <vector>

#include "image/field.h"
#include "image/read.h"
#include "report/named_value.h"

namespace stillfield {

// Empty paths: none.
struct LightFiles {
  std::filesystem::path flat_field, background;
  std::string flat_field_sha256, background_sha256;

  bool any() const { return !flat_field.empty() || !background.empty(); }
};

// Under the names of the record; nothing for files that are not given.
void name_light_files(const LightFiles& files, std::vector<NamedValue>& settings);

// Sets the digests. Throws Error(kInput) for what is not there.
void digest_light_files(LightFiles& files);

// Corrects pixels and colour planes, and notes it. Throws Error(kInput) if sizes differ, or where
// the flat field is not above the background.
void correct_light(const LightFiles& files, const ReadLimits& limits, Field& field);

}  // namespace stillfield

#endif  // STILLFIELD_JOB_LIGHT_FILES_H_
