#include "job/folder_lock.h"

#include <fcntl.h>
#include <sys/file.h>
#include <unistd.h>

#include <cerrno>

#include "core/error.h"

namespace stillfield {

FolderLock::FolderLock(const std::filesystem::path& folder, bool shared)
    : descriptor_(::open(folder.c_str(), O_RDONLY | O_DIRECTORY | O_CLOEXEC)) {
  if (descriptor_ < 0) return;
  if (::flock(descriptor_, (shared ? LOCK_SH : LOCK_EX) | LOCK_NB) == 0) return;
  const bool taken = errno == EWOULDBLOCK;
  ::close(descriptor_);
  descriptor_ = -1;
  if (taken) {
    throw Error(ErrorKind::kUsage,
                folder.string() +
                    ": another run is at work in this output folder; wait for its end, give --out "
                    "another folder, or start all runs as parts with --shard");
  }
}

FolderLock::~FolderLock() {
  if (descriptor_ >= 0) ::close(descriptor_);
}

}  // namespace stillfield
