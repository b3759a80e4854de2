#include "report/versions.h"

namespace stillfield {

std::string program_version() {
  return STILLFIELD_VERSION;
}

std::vector<LibraryVersion> library_versions() {
  std::vector<LibraryVersion> all = {{"oneTBB", STILLFIELD_TBB},
                                     {"Highway", STILLFIELD_HIGHWAY},
                                     {"Eigen", STILLFIELD_EIGEN},
                                     {"nlohmann-json", STILLFIELD_JSON},
                                     {"CLI11", STILLFIELD_CLI11}};
  for (LibraryVersion& library : image_library_versions()) all.push_back(std::move(library));
  return all;
}

}  // namespace stillfield
