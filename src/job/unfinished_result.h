// The results of a field while they are being written.
//
// From its making to the writing of the record there is no finished result: the old record goes
// first, with the files it lists. If the record does not come, because the disk is full or the user
// asked to stop, the files written so far go too.
#ifndef STILLFIELD_JOB_UNFINISHED_RESULT_H_
#define STILLFIELD_JOB_UNFINISHED_RESULT_H_

#include <filesystem>

#include "report/record.h"

namespace stillfield {

class UnfinishedResult {
 public:
  // `record` lists the files that have been written, and outlives this object.
  UnfinishedResult(std::filesystem::path stem, const ImageRecord& record);
  ~UnfinishedResult();
  UnfinishedResult(const UnfinishedResult&) = delete;
  UnfinishedResult& operator=(const UnfinishedResult&) = delete;

 private:
  std::filesystem::path stem_;
  const ImageRecord& record_;
};

}  // namespace stillfield

#endif  // STILLFIELD_JOB_UNFINISHED_RESULT_H_
