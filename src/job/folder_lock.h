// One run at a time in an output folder, or any number of shards of runs.
//
// The folder itself is locked (flock), so no file is left behind, however the run ends. Where the
// file system has no such locks, nothing is guarded. Source  Linux flock(2)
#ifndef STILLFIELD_JOB_FOLDER_LOCK_H_
#define STILLFIELD_JOB_FOLDER_LOCK_H_

#include <filesystem>

namespace stillfield {

class FolderLock {
 public:
  // Throws Error(kUsage) if another run is at work in the folder.
  FolderLock(const std::filesystem::path& folder, bool shared);
  ~FolderLock();
  FolderLock(const FolderLock&) = delete;
  FolderLock& operator=(const FolderLock&) = delete;

 private:
  int descriptor_ = -1;
};

}  // namespace stillfield

#endif  // STILLFIELD_JOB_FOLDER_LOCK_H_
