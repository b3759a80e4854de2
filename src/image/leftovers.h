// Temporary files of runs that were killed, and their removal.
//
// Name     ".NAME.stillfield-PID-N.partial": hidden, and bearing the program's name
// Alive    a writer holds a lock on its temporary file (flock), which the system takes from it
//          however it ends; so a file of such a name whose lock can be had belongs to nobody
// Removed  regular files of such a name that nobody holds, in one folder, not below it. Where locks
//          do not exist nothing is removed
// Source   Linux flock(2)
#ifndef STILLFIELD_IMAGE_LEFTOVERS_H_
#define STILLFIELD_IMAGE_LEFTOVERS_H_

#include <filesystem>
#include <string>
#include <string_view>

namespace stillfield {

// Short enough for any file system, whatever the length of `name`.
std::string partial_name(std::string_view name, long process, unsigned number);

bool is_partial_name(std::string_view name);

// Returns how many were removed. A folder that is not there or cannot be listed has none.
int remove_leftovers(const std::filesystem::path& folder);

}  // namespace stillfield

#endif  // STILLFIELD_IMAGE_LEFTOVERS_H_
