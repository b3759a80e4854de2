// What became of the images of a run, in numbers.
#ifndef STILLFIELD_JOB_FOLDER_COUNTS_H_
#define STILLFIELD_JOB_FOLDER_COUNTS_H_

#include <vector>

#include "report/record.h"

namespace stillfield {

struct FolderCounts {
  int done = 0;
  int skipped = 0;  // finished before
  int failed = 0;
  int not_reached = 0;
  int not_converged = 0;  // of those done or skipped
  int check_failed = 0;   // likewise
  bool interrupted = false;
  double seconds_to_do = 0;  // of a dry run: an estimate

  void count_verdict(const ImageRecord& record) {
    if (!record.verdict.converged) ++not_converged;
    if (record.assessment.check_failed) ++check_failed;
  }

  // Under the names of run.json.
  std::vector<NamedValue> named() const {
    const auto whole = [](int n) { return static_cast<std::uint64_t>(n); };
    return {{"done", whole(done)},
            {"skipped", whole(skipped)},
            {"failed", whole(failed)},
            {"not_reached", whole(not_reached)},
            {"not_converged", whole(not_converged)},
            {"check_failed", whole(check_failed)}};
  }
};

}  // namespace stillfield

#endif  // STILLFIELD_JOB_FOLDER_COUNTS_H_
