// The image libraries as a whole: how many threads they take, and which versions they are.
#ifndef STILLFIELD_IMAGE_LIBRARIES_H_
#define STILLFIELD_IMAGE_LIBRARIES_H_

#include <string>
#include <vector>

namespace stillfield {

struct LibraryVersion {
  std::string name;
  std::string version;
};

// OpenCV keeps a thread pool of its own, whatever limit ours has. Call once at start-up.
void use_one_thread_in_image_libraries();

// As loaded at run time.
std::vector<LibraryVersion> image_library_versions();

}  // namespace stillfield

#endif  // STILLFIELD_IMAGE_LIBRARIES_H_
