// Files of the demo pictures.
#ifndef STILLFIELD_TESTS_GENERATE_WRITE_H_
#define STILLFIELD_TESTS_GENERATE_WRITE_H_

#include <filesystem>
#include <string>

#include "generate/picture.h"

namespace stillfield::generate {

// Writes root/FOLDER/NAME and root/truth/FOLDER/NAME: 8-bit single pages as PNG, everything else
// as deflated TIFF. Returns the picture's lines of truth/area-fractions.csv. Throws Error.
std::string write_picture(const std::filesystem::path& root, const Picture& picture);

}  // namespace stillfield::generate

#endif  // STILLFIELD_TESTS_GENERATE_WRITE_H_
