// The schedule of a run: when it looks, how its parts grow, where it ends.
#include "sampler/schedule.h"

#include <catch2/catch.hpp>
#include <vector>

using namespace stillfield;

namespace {

void run_blocks(Schedule& schedule, int blocks) {
  for (int i = 0; i < blocks; ++i) schedule.block_done();
}

// Warm-up over at the first look.
Schedule sampling_schedule(const ScheduleSettings& settings) {
  Schedule schedule(settings, false);
  while (!schedule.look_at_warm_up()) schedule.block_done();
  schedule.warm_up_judged(true);
  return schedule;
}

std::vector<int> sampling_looks(Schedule& schedule) {
  std::vector<int> looks;
  while (schedule.stage() == Stage::kSampling) {
    schedule.block_done();
    if (!schedule.look_at_sampling()) continue;
    looks.push_back(schedule.sampling_sweeps());
    schedule.sampling_judged(false);
  }
  return looks;
}

}  // namespace

TEST_CASE("looks at sampling come after 1.5, 2, 3, 4.5, 6, 9, 13.5 ... times the first part") {
  ScheduleSettings settings;
  settings.max_sweeps = 1 << 20;
  Schedule schedule = sampling_schedule(settings);
  const std::vector<int> looks = sampling_looks(schedule);
  REQUIRE(looks.size() > 12);
  const std::vector<double> factors = {1.5, 2, 3, 4.5, 6, 9, 13.5, 18, 27, 40.5, 54, 81};
  for (std::size_t i = 0; i < factors.size(); ++i)
    CHECK(looks[i] == factors[i] * settings.first_part);
}

TEST_CASE("at every look neither part of a chain is longer than twice the other") {
  for (const int block : {1, 2, 4, 8, 16}) {
    ScheduleSettings settings;
    settings.sweeps_a_block = block;
    settings.max_sweeps = 60000;
    Schedule schedule = sampling_schedule(settings);
    int first = settings.first_part;
    for (const int look : sampling_looks(schedule)) {
      const int second = look - first;
      CAPTURE(block, look, first, second);
      CHECK(2 * second >= first);
      CHECK(second <= 2 * first);
      if (second >= 2 * first) first = look;  // what the counts' parts do
    }
  }
}

TEST_CASE("warm-up windows grow by half and end at a third of the limit") {
  ScheduleSettings settings;
  settings.max_sweeps = 3000;
  Schedule schedule(settings, false);
  CHECK(schedule.stage() == Stage::kWarming);
  std::vector<int> looks;
  while (schedule.stage() == Stage::kWarming) {
    schedule.block_done();
    if (!schedule.look_at_warm_up()) continue;
    looks.push_back(schedule.warming_sweeps());
    schedule.warm_up_judged(false);
  }
  CHECK(looks == std::vector<int>{96, 144, 216, 324, 488, 732, 1000});
  CHECK(schedule.warm_up_forced());
  CHECK(schedule.stage() == Stage::kSampling);
}

TEST_CASE("the whole run stays within its limit and says that it stopped there") {
  for (const int limit : {600, 1000, 3000, 8000, 60000}) {
    for (const bool agreed : {true, false}) {
      ScheduleSettings settings;
      settings.max_sweeps = limit;
      Schedule schedule(settings, false);
      while (schedule.stage() == Stage::kWarming) {
        schedule.block_done();
        if (schedule.look_at_warm_up()) schedule.warm_up_judged(agreed);
      }
      const std::vector<int> looks = sampling_looks(schedule);
      CAPTURE(limit, agreed);
      CHECK(!looks.empty());
      CHECK(schedule.stage() == Stage::kDone);
      CHECK(schedule.stopped_by_limit());
      CHECK(schedule.warming_sweeps() + schedule.sampling_sweeps() <= limit);
    }
  }
}

TEST_CASE("adaptation comes first when asked for, and a good look ends the run") {
  Schedule schedule({}, true);
  CHECK(schedule.stage() == Stage::kAdapting);
  run_blocks(schedule, 10);
  CHECK(schedule.adapting_sweeps() == 40);
  CHECK(!schedule.look_at_warm_up());
  schedule.coupling_settled();
  CHECK(schedule.stage() == Stage::kWarming);
  while (!schedule.look_at_warm_up()) schedule.block_done();
  schedule.warm_up_judged(true);
  CHECK(!schedule.warm_up_forced());
  while (!schedule.look_at_sampling()) schedule.block_done();
  schedule.sampling_judged(true);
  CHECK(schedule.stage() == Stage::kDone);
  CHECK(!schedule.stopped_by_limit());
  CHECK(schedule.sampling_sweeps() == 144);
}
