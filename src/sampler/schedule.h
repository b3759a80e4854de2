// When to adapt, when to look whether warm-up is over, when to look whether enough was drawn.
//
// The schedule knows nothing of diagnostics: the caller looks and answers.
//   adapting   until the coupling has settled (only with --coupling auto)
//   warming    windows that grow by half; the caller judges the second half of each
//   sampling   looks after 1.5, 2, 3, 4.5, 6, 9, 13.5, ... times the first part: at every look each
//              chain splits into two parts of which neither is shorter than half the other, so
//              that split statistics need two accumulators a chain (posterior/label_counts.h)
#ifndef STILLFIELD_SAMPLER_SCHEDULE_H_
#define STILLFIELD_SAMPLER_SCHEDULE_H_

#include <cstdint>

namespace stillfield {

enum class Stage { kAdapting, kWarming, kSampling, kDone };

struct ScheduleSettings {
  int sweeps_a_block = 4;  // label sweeps between parameter draws
  int first_part = 96;     // sweeps, a multiple of 2 * sweeps_a_block
  int first_window = 96;   // warm-up sweeps before the first look
  int max_sweeps = 8000;   // a chain, warm-up and sampling together; at least 600
};

class Schedule {
 public:
  Schedule(const ScheduleSettings& settings, bool adapt);

  Stage stage() const { return stage_; }
  int sweeps_a_block() const { return settings_.sweeps_a_block; }
  int first_part() const { return settings_.first_part; }

  // Every chain has made one more block.
  void block_done();

  void coupling_settled();         // adapting -> warming
  bool look_at_warm_up() const;    // a window is full
  void warm_up_judged(bool over);  // warming -> sampling, or a longer window
  bool look_at_sampling() const;
  void sampling_judged(bool enough);

  int adapting_sweeps() const { return adapting_; }
  int warming_sweeps() const { return warming_; }
  int sampling_sweeps() const { return sampling_; }
  // Warm-up ended by its limit (a third of max_sweeps) instead of by agreement of the chains.
  bool warm_up_forced() const { return warm_up_forced_; }
  bool stopped_by_limit() const { return stopped_by_limit_; }

 private:
  ScheduleSettings settings_;
  Stage stage_;
  int adapting_ = 0;
  int warming_ = 0;
  int sampling_ = 0;
  int window_;
  int next_look_;
  int part_;  // length of the first of the two parts
  bool warm_up_forced_ = false;
  bool stopped_by_limit_ = false;
};

}  // namespace stillfield

#endif  // STILLFIELD_SAMPLER_SCHEDULE_H_
