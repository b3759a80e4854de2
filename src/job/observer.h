// How a running job tells the outside where it is, and how it is told to stop.
#ifndef STILLFIELD_JOB_OBSERVER_H_
#define STILLFIELD_JOB_OBSERVER_H_

#include <string>

#include "sampler/schedule.h"

namespace stillfield {

class JobObserver {
 public:
  virtual ~JobObserver() = default;

  // What is to be done is known: fields to do, and fields found finished.
  virtual void planned(int /*to_do*/, int /*finished*/) {}
  // A field (one page of a file) begins: its number from 0 among those to do, and its name.
  virtual void field_started(int /*number*/, int /*of*/, const std::string& /*name*/) {}
  // Every chain has made `sweeps` sweeps in all.
  virtual void swept(Stage /*stage*/, int /*sweeps*/) {}
  // Step `step` of `steps` of a restoration is done; it may end before the last.
  virtual void stepped(int /*step*/, int /*steps*/) {}
  virtual void field_finished(const std::string& /*name*/, bool /*converged*/) {}
  virtual void field_failed(const std::string& /*name*/, const std::string& /*sentence*/) {}

  // Asked between blocks of sweeps and between fields.
  virtual bool stop_requested() const { return false; }
};

}  // namespace stillfield

#endif  // STILLFIELD_JOB_OBSERVER_H_
