// What a run of `segment` is asked to do.
#ifndef STILLFIELD_JOB_SETTINGS_H_
#define STILLFIELD_JOB_SETTINGS_H_

#include <cstdint>
#include <filesystem>
#include <string>
#include <vector>

#include "diagnose/verdict.h"
#include "image/read.h"
#include "model/neighbourhood.h"
#include "report/named_value.h"
#include "sampler/coupling.h"
#include "sampler/schedule.h"

namespace stillfield {

inline constexpr int kAutoClasses = 0;  // chosen by the data (job/choose_classes.h)

// Settings that change results; all of them stand in the record.
struct SegmentSettings {
  int classes = 2;  // 2..64, or kAutoClasses
  Connectivity connectivity = Connectivity::kFour;
  CouplingSettings coupling;
  bool shared_variance = false;
  int chains = 4;  // 2..16
  std::uint64_t seed = 1;
  ScheduleSettings schedule;
  ConvergenceTarget target;
};

// Settings that do not.
struct RunSettings {
  std::filesystem::path output;
  int threads = 1;
  bool redo = false;  // do again what is finished
  ReadLimits limits;
  std::filesystem::path group_file;  // of the summary's groups; empty: by folder
  std::string group_column = "group";
};

// All of them under the names of the record.
std::vector<NamedValue> named_settings(const SegmentSettings& settings);

}  // namespace stillfield

#endif  // STILLFIELD_JOB_SETTINGS_H_
