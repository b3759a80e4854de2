// Version of the program and of the libraries it was built with.
#ifndef STILLFIELD_REPORT_VERSIONS_H_
#define STILLFIELD_REPORT_VERSIONS_H_

#include <string>
#include <vector>

#include "image/libraries.h"

namespace stillfield {

inline constexpr char kProgramName[] = "stillfield";

std::string program_version();

// Image libraries as loaded, the others as found at build time.
std::vector<LibraryVersion> library_versions();

}  // namespace stillfield

#endif  // STILLFIELD_REPORT_VERSIONS_H_
