// The record of one image: everything that is known about its result, as JSON.
//
// Layout   docs/outputs.md lists the keys; their order is fixed. NaN and infinities become null and
//          read back as NaN; bytes of a file name that are not UTF-8 become U+FFFD.
// Repeats  two runs with the same input, settings and version differ in "run" alone
#ifndef STILLFIELD_REPORT_RECORD_H_
#define STILLFIELD_REPORT_RECORD_H_

#include <cstdint>
#include <filesystem>
#include <string>
#include <vector>

#include "diagnose/assessment.h"
#include "diagnose/model_check.h"
#include "diagnose/verdict.h"
#include "measure/measurement.h"
#include "report/blur_facts.h"
#include "report/named_value.h"
#include "report/restoration_facts.h"
#include "report/shading_facts.h"

namespace stillfield {

inline constexpr char kRecordSuffix[] = ".record.json";

struct InputFacts {
  std::string path;  // relative to the input folder, with forward slashes
  std::string sha256;
  std::int64_t bytes = 0;
  int page = 1;  // counts from 1
  int pages = 1;
  int width = 0;
  int height = 0;
  std::string samples;  // "8-bit unsigned integer", "32-bit float", ...
  int channels = 1;
  double pixel_size_um = kUnknown;
  std::vector<std::string> notes;  // of the reader and of the grey levels
  std::string pixel_size_from;     // "option", "OME metadata", "resolution tags"; empty: unknown
  std::string plane;               // "z 3 of 12, channel 1 of 2, time 1 of 1"; empty without OME
};

struct GreyFacts {
  int levels = 0;
  int distinct = 0;
  double origin = 0;
  double step = 1;
  std::int64_t observed = 0;
  std::int64_t missing = 0;
};

struct ClassFacts {
  int label = 0;  // 1..K by rising mean
  double alpha = 0;
  TraceSummary mean;  // in grey values of the file
  TraceSummary sd;
};

struct ModelFacts {
  double beta = 0;  // its posterior mean with --coupling sampled
  double beta_lower95 = kUnknown;
  double beta_upper95 = kUnknown;
  double log_partition_hysteresis = kUnknown;
  std::vector<ClassFacts> classes;
};

struct ClassesTried {
  int classes = 1;
  double score = 0;       // log predictive density of held-out pixels less a penalty, nats
  double below_best = 0;  // the best score less this one
  double error = 0;       // its standard error
};

struct ClassChoiceFacts {
  int used = 2;               // number of classes of the result
  int best_explained_by = 0;  // what --classes auto chose, 1 too; 0 for a number that was given
  int runner_up = 0;          // best score of the others; 0 if there is none
  double margin = kUnknown;   // score of the choice less that of the runner-up
  std::vector<ClassesTried> tried;
};

struct CouplingTried {
  double beta = 0;
  double score = 0;
};

// Sweeps of each chain.
struct ScheduleFacts {
  int adapting_sweeps = 0;
  int warming_sweeps = 0;
  int sampling_sweeps = 0;
  bool warm_up_forced = false;
  bool stopped_by_limit = false;
};

struct ProbabilityFacts {
  double mcse = kUnknown;
  double share_rhat_above_1_05 = kUnknown;  // of the pixels
  double uncertain_share = kUnknown;        // of the pixels: largest probability below 0.9
};

// Of the parametric bootstrap of the measurements.
struct BootstrapFacts {
  int replicates = 0;  // 0: not done
  int corrected = 0;   // measurements; the others were left as they were
  double blur = 0;     // of the simulated images, standard deviation in pixels
};

struct VerdictFacts {
  bool converged = false;
  std::vector<std::string> sentences;
};

// Named NAME + suffix beside the record.
struct OutputFile {
  std::string suffix;
  std::int64_t bytes = 0;
  std::string sha256;
};

struct RunFacts {
  std::string cpu_target;
  int threads = 1;
  double read_seconds = 0;
  double sample_seconds = 0;
  double write_seconds = 0;
};

inline constexpr char kSegment[] = "segment";
inline constexpr char kDenoise[] = "denoise";

// The parts from `grey` to `bootstrap` and those of the checks belong to segment, `restoration`
// to denoise.
struct ImageRecord {
  std::string command;
  std::string version;  // of the program
  std::vector<NamedValue> libraries;
  std::string settings_digest;
  InputFacts input;
  GreyFacts grey;
  std::vector<NamedValue> settings;
  std::string image_seed;  // hexadecimal: JSON readers may round 64-bit integers
  ClassChoiceFacts class_choice;
  ModelFacts model;
  BlurFacts blur;
  ShadingFacts shading;
  std::vector<CouplingTried> coupling_tried;
  ScheduleFacts schedule;
  std::vector<NamedSummary> scalars;
  ProbabilityFacts probability;
  BootstrapFacts bootstrap;
  RestorationFacts restoration;
  VerdictFacts verdict;
  Assessment assessment;
  std::vector<ModelCheck> checks;
  std::vector<Measurement> measurements;
  std::vector<OutputFile> outputs;
  RunFacts run;
};

// SHA-256 over all that decides the bytes of a result.
std::string settings_digest(const std::vector<NamedValue>& settings,
                            const std::string& input_sha256, int page);

std::string record_text(const ImageRecord& record);

// Throws Error(kInput), without a file name, if the text is no record of this layout.
ImageRecord parse_record(const std::string& text);

// Throws Error(kOutput).
void write_record(const std::filesystem::path& file, const ImageRecord& record);

// Throws Error(kInput) if the file is missing or is no record.
ImageRecord read_record(const std::filesystem::path& file);

}  // namespace stillfield

#endif  // STILLFIELD_REPORT_RECORD_H_
