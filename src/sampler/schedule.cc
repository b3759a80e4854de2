#include "sampler/schedule.h"

namespace stillfield {

Schedule::Schedule(const ScheduleSettings& settings, bool adapt)
    : settings_(settings),
      stage_(adapt ? Stage::kAdapting : Stage::kWarming),
      window_(settings.first_window),
      next_look_(settings.first_part + settings.first_part / 2),
      part_(settings.first_part) {}

void Schedule::block_done() {
  if (stage_ == Stage::kAdapting) adapting_ += settings_.sweeps_a_block;
  if (stage_ == Stage::kWarming) warming_ += settings_.sweeps_a_block;
  if (stage_ == Stage::kSampling) sampling_ += settings_.sweeps_a_block;
}

void Schedule::coupling_settled() {
  stage_ = Stage::kWarming;
}

bool Schedule::look_at_warm_up() const {
  return stage_ == Stage::kWarming && warming_ >= window_;
}

void Schedule::warm_up_judged(bool over) {
  const int limit = settings_.max_sweeps / 3;
  if (over || warming_ >= limit) {
    warm_up_forced_ = !over;
    stage_ = Stage::kSampling;
    return;
  }
  window_ += window_ / 2;
  if (window_ > limit) window_ = limit;
}

bool Schedule::look_at_sampling() const {
  return stage_ == Stage::kSampling && sampling_ >= next_look_;
}

void Schedule::sampling_judged(bool enough) {
  if (enough) {
    stage_ = Stage::kDone;
    return;
  }
  // Second part over first part: 1/2, 1, 2, then the parts merge and it starts again.
  int following;
  if (next_look_ == part_ + part_ / 2) {
    following = 2 * part_;
  } else if (next_look_ == 2 * part_) {
    following = 3 * part_;
  } else {
    part_ *= 3;
    following = part_ + part_ / 2;
  }
  if (warming_ + following > settings_.max_sweeps) {
    stopped_by_limit_ = true;
    stage_ = Stage::kDone;
    return;
  }
  next_look_ = following;
}

}  // namespace stillfield
