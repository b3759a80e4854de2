#include "job/segment_field.h"

#include <algorithm>
#include <charconv>
#include <chrono>
#include <new>

#include "core/error.h"
#include "image/digest.h"
#include "image/read.h"
#include "image/write.h"
#include "job/field_record.h"
#include "job/output_folder.h"
#include "job/restore_one.h"
#include "report/class_colours.h"
#include "report/versions.h"
#include "simd/target.h"

namespace stillfield {
namespace {

namespace fs = std::filesystem;

constexpr float kCertain = 0.9F;  // pixels whose largest probability is smaller are uncertain

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

std::uint64_t seed_of(const SegmentSettings& settings, const std::string& sha256, int page) {
  std::vector<std::uint8_t> digest(sha256.size() / 2);
  for (std::size_t i = 0; i < digest.size(); ++i) {
    std::from_chars(sha256.data() + 2 * i, sha256.data() + 2 * i + 2, digest[i], 16);
  }
  return image_seed(settings.seed, digest, static_cast<std::uint32_t>(page));
}

std::string hexadecimal(std::uint64_t value) {
  char digits[16];
  const auto end = std::to_chars(digits, digits + sizeof digits, value, 16);
  return "0x" + std::string(digits, end.ptr);
}

double share_below(const std::vector<Volume<float>>& probability, float limit) {
  const Extent extent = probability.front().extent();
  std::int64_t below = 0;
  for (int y = 0; y < extent.height; ++y) {
    for (int x = 0; x < extent.width; ++x) {
      float largest = 0;
      for (const Volume<float>& p : probability) largest = std::max(largest, p.at(x, y));
      below += largest < limit ? 1 : 0;
    }
  }
  return static_cast<double>(below) / static_cast<double>(extent.sites());
}

void write_preview(const fs::path& file, const Volume<std::uint8_t>& labels, int classes) {
  Volume<std::uint8_t> red(labels.extent());
  Volume<std::uint8_t> green(labels.extent());
  Volume<std::uint8_t> blue(labels.extent());
  for (int y = 0; y < labels.height(); ++y) {
    for (int x = 0; x < labels.width(); ++x) {
      const Rgb colour = class_colour(labels.at(x, y), classes);
      red.at(x, y) = colour.red;
      green.at(x, y) = colour.green;
      blue.at(x, y) = colour.blue;
    }
  }
  write_png(file, {red.view(), green.view(), blue.view()});
}

void write_maps(const FieldTask& task, const LabelSampling& sampling, int classes,
                const TiffOptions& options, ImageRecord& record) {
  const LabelCounts& counts = *sampling.counts;
  const auto finished = [&](const std::string& suffix) {
    const fs::path file = with_suffix(task.stem, suffix);
    record.outputs.push_back(
        {suffix, static_cast<std::int64_t>(fs::file_size(file)), sha256_of_file(file)});
  };
  {
    const Volume<std::uint8_t> labels = counts.most_probable();
    write_tiff(with_suffix(task.stem, ".labels.tif"), labels.view(), options);
    finished(".labels.tif");
    write_preview(with_suffix(task.stem, ".labels.png"), labels, classes);
    finished(".labels.png");
  }
  {
    std::vector<Volume<float>> probability;
    std::vector<TiffPage<float>> pages;
    for (int k = 0; k < classes; ++k) probability.push_back(counts.probability(k));
    for (int k = 0; k < classes; ++k) {
      pages.push_back(
          {probability[static_cast<std::size_t>(k)].view(), "class " + std::to_string(k + 1)});
    }
    write_tiff(with_suffix(task.stem, ".probability.tif"), pages, options);
    finished(".probability.tif");
    record.probability.uncertain_share = share_below(probability, kCertain);
  }
  write_tiff(with_suffix(task.stem, ".entropy.tif"), counts.entropy().view(), options);
  finished(".entropy.tif");
}

ImageRecord segment(const FieldTask& task, const SegmentSettings& settings, const RunSettings& run,
                    const Pool& pool, JobObserver& observer, LogPartitionMemo& memo) {
  ImageRecord record;
  Stopwatch watch;
  GreyLevels grey;
  TiffOptions options;
  {
    const Field field = read_page(task.file, task.page, run.limits);
    grey = make_grey_levels(field.pixels.view());
    record.input = describe_input(task, field, grey);
    options.pixel_size_um = field.pixel_size_um;
  }
  record.input.sha256 = task.sha256.empty() ? sha256_of_file(task.file) : task.sha256;
  record.input.bytes = static_cast<std::int64_t>(fs::file_size(task.file));
  record.grey = describe_grey(grey);
  record.version = program_version();
  for (const LibraryVersion& library : library_versions()) {
    record.libraries.push_back({library.name, library.version});
  }
  record.settings = named_settings(settings);
  record.settings_digest = settings_digest(record.settings, record.input.sha256, record.input.page);
  record.run = {active_cpu_target(), pool.threads(), watch.lap(), 0, 0};

  const std::uint64_t seed = seed_of(settings, record.input.sha256, task.page);
  record.image_seed = hexadecimal(seed);
  const LabelSampling sampling = restore_one(grey, settings, seed, pool, observer, &memo);
  describe_sampling(sampling, settings, record);
  record.run.sample_seconds = watch.lap();

  const fs::path record_file = with_suffix(task.stem, kRecordSuffix);
  fs::remove(record_file);  // from here to the end there is no finished result
  write_maps(task, sampling, settings.classes, options, record);
  record.run.write_seconds = watch.lap();
  write_record(record_file, record);
  return record;
}

// Rooms that see pixels alone do not know the name of the file.
std::string with_name(const FieldTask& task, const std::string& sentence) {
  const bool named =
      sentence.rfind(task.file.string(), 0) == 0 || sentence.rfind(task.stem.string(), 0) == 0;
  return named ? sentence : task.name() + ": " + sentence;
}

}  // namespace

ImageRecord segment_field(const FieldTask& task, const SegmentSettings& settings,
                          const RunSettings& run, const Pool& pool, JobObserver& observer,
                          LogPartitionMemo& memo) {
  try {
    return segment(task, settings, run, pool, observer, memo);
  } catch (const Error& error) {
    if (error.kind() == ErrorKind::kInterrupt) throw;
    throw Error(error.kind(), with_name(task, error.what()));
  } catch (const std::bad_alloc&) {
    throw Error(ErrorKind::kInput, task.name() +
                                       ": there is not enough memory for this image; cut it into "
                                       "parts or use a machine with more memory");
  } catch (const fs::filesystem_error& error) {
    throw Error(ErrorKind::kOutput, task.name() + ": " + error.code().message() +
                                        "; check the input and the output folder");
  }
}

}  // namespace stillfield
