// How a running job tells the outside where it is, and how it is told to stop.
#ifndef STILLFIELD_JOB_OBSERVER_H_
#define STILLFIELD_JOB_OBSERVER_H_

#include <cstdint>
#include <string>

#include "sampler/schedule.h"

namespace stillfield {

struct ListedField {
  std::string name;
  std::string state;  // "to do", "finished before", or the sentence that says why it would fail
  std::int64_t width = 0;
  std::int64_t height = 0;
  double bytes = 0;  // of memory it needs
};

class JobObserver {
 public:
  virtual ~JobObserver() = default;

  // A field (one page of a file) begins: its number from 0 among those of the run, of which there
  // are `of` as far as is known (pages of files to come count as one), and its name.
  virtual void field_started(int /*number*/, int /*of*/, const std::string& /*name*/) {}
  // Every chain has made `sweeps` sweeps in all.
  virtual void swept(Stage /*stage*/, int /*sweeps*/) {}
  // Step `step` of `steps` of a restoration is done; it may end before the last.
  virtual void stepped(int /*step*/, int /*steps*/) {}
  virtual void field_finished(const std::string& /*name*/, bool /*converged*/) {}
  virtual void field_failed(const std::string& /*name*/, const std::string& /*sentence*/) {}

  // Of a dry run: what would be done with a field.
  virtual void listed(const ListedField& /*field*/) {}

  // Asked between blocks of sweeps and between fields.
  virtual bool stop_requested() const { return false; }
};

}  // namespace stillfield

#endif  // STILLFIELD_JOB_OBSERVER_H_
