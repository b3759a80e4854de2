// What the jobs on one field share, whatever they compute: seed, head of the record, list of the
// files written, and sentences that name the file.
#ifndef STILLFIELD_JOB_FIELD_FRAME_H_
#define STILLFIELD_JOB_FIELD_FRAME_H_

#include <chrono>
#include <cstdint>
#include <functional>
#include <string>

#include "image/field.h"
#include "image/write.h"
#include "job/field_task.h"
#include "report/record.h"

namespace stillfield {

// Seconds since it was made or last asked.
class Stopwatch {
 public:
  double lap() {
    const auto now = std::chrono::steady_clock::now();
    const std::chrono::duration<double> passed = now - start_;
    start_ = now;
    return passed.count();
  }

 private:
  std::chrono::steady_clock::time_point start_ = std::chrono::steady_clock::now();
};

// Of one page: the user's seed mixed with the digest of the file (random/counters.h).
std::uint64_t seed_of(std::uint64_t seed, const std::string& sha256, int page);

// Command, version, libraries, input (with digest and size), settings and their digest, and the
// image's seed, which is returned.
std::uint64_t begin_record(const FieldTask& task, const Field& field, const std::string& command,
                           const std::vector<NamedValue>& settings, std::uint64_t seed,
                           ImageRecord& record);

// A pixel size that the user gave takes the place of the file's.
void use_pixel_size(double um, Field& field);

// The maps of a page carry on its pixel size and, where it came with OME metadata, those too.
TiffOptions map_options(const Field& field);

// Adds the file stem + suffix, which has just been written, to the record.
void list_output(const FieldTask& task, const std::string& suffix, ImageRecord& record);

// Runs the job; what it throws becomes an Error with one sentence that names the file. An
// interrupt passes unchanged.
ImageRecord with_file_named(const FieldTask& task, const std::function<ImageRecord()>& job);

}  // namespace stillfield

#endif  // STILLFIELD_JOB_FIELD_FRAME_H_
