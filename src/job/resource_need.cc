#include "job/resource_need.h"

#include <algorithm>
#include <cmath>
#include <fstream>
#include <limits>
#include <optional>

#include "job/choose_classes.h"

namespace stillfield {
namespace {

constexpr double kProgramBytes = 70e6;
constexpr double kMargin = 1.05;
constexpr double kBlurBytes = 30;  // of each chain, beside the rest

// The number behind `name` in a file of lines "name: number kB".
std::optional<std::int64_t> kilobytes_in(const char* file, const std::string& name) {
  std::ifstream stream(file);
  for (std::string word; stream >> word;) {
    std::int64_t value = 0;
    if (word == name && stream >> value) return value;
  }
  return std::nullopt;
}

std::optional<std::int64_t> number_in(const char* file) {
  std::ifstream stream(file);
  std::int64_t value = 0;
  return stream >> value ? std::optional(value) : std::nullopt;  // "max": no limit
}

ResourceNeed need(const PageShape& shape, double bytes_a_pixel, double seconds_a_megapixel,
                  int threads) {
  const auto pixels = static_cast<double>(shape.pixels());
  return {kProgramBytes + kMargin * bytes_a_pixel * pixels,
          seconds_a_megapixel * pixels * 1e-6 / std::min(threads, 8)};
}

}  // namespace

// Bytes a pixel: what every run has; each chain's labels and visits; weights and maps of the
// classes; what measuring takes in each thread that has a chain; the simulated images.
ResourceNeed need_of(const PageShape& shape, const SegmentSettings& settings, int threads) {
  const double classes = settings.classes == kAutoClasses ? kMostAutoClasses : settings.classes;
  const double chains = settings.chains;
  const double at_once = std::min(chains, static_cast<double>(threads));
  double a_pixel = 26 + chains * (4 + 3 * classes) + 10.5 * classes + 44 * (at_once - 1);
  if (settings.replicates > 0) a_pixel += 16 * classes;
  if (settings.blur.mode != BlurMode::kNone) a_pixel += chains * kBlurBytes;

  const bool quick = settings.target.min_ess < ConvergenceTarget{}.min_ess;
  double seconds = (2 + 6.5 * classes) * chains / 4 * (quick ? 1.2 : 2.5);
  if (settings.replicates > 0) seconds *= 1.5;
  if (settings.blur.mode != BlurMode::kNone) seconds *= 8;
  return need(shape, a_pixel, seconds, threads);
}

ResourceNeed need_of(const PageShape& shape, const DenoiseSettings& settings, int threads) {
  const bool patches = settings.prior == PriorChoice::kPatches;
  double a_pixel = 0;
  double seconds = 0;
  if (patches) {
    a_pixel = settings.quick ? 80 + 8 * std::min(threads, 4) : 165;
    seconds = settings.quick ? 6.5 : 46;
  } else {
    a_pixel = 36 + 40 * settings.chains;
    seconds = 2.5 * settings.chains * (settings.quick ? 1 : 2);
  }
  const double channels = shape.channels;
  a_pixel += 30 * (channels - 1) + 5.5 * settings.samples * channels;
  seconds *= channels * (settings.recheck ? 3 : 1);
  return need(shape, a_pixel, seconds, threads);
}

std::int64_t available_memory() {
  std::int64_t available = std::numeric_limits<std::int64_t>::max();
  if (const auto free = kilobytes_in("/proc/meminfo", "MemAvailable:")) available = *free * 1024;
  const auto limit = number_in("/sys/fs/cgroup/memory.max");
  const auto used = number_in("/sys/fs/cgroup/memory.current");
  if (limit && used) available = std::min(available, std::max<std::int64_t>(*limit - *used, 0));
  return available;
}

std::string memory_text(double bytes) {
  const bool large = bytes >= 1e9;
  const double tenths = std::ceil(bytes / (large ? 1e8 : 1e6));
  const auto whole = static_cast<std::int64_t>(tenths);
  if (!large) return std::to_string(whole) + " MB";
  return std::to_string(whole / 10) + "." + std::to_string(whole % 10) + " GB";
}

std::string memory_objection(const PageShape& shape, const ResourceNeed& need, std::int64_t limit) {
  if (need.bytes <= static_cast<double>(limit)) return {};
  return std::to_string(shape.width) + " x " + std::to_string(shape.height) +
         " pixels need about " + memory_text(need.bytes) + " of memory and " +
         memory_text(static_cast<double>(limit)) +
         " may be used; cut the image into parts, or give more with --memory on a larger machine";
}

}  // namespace stillfield
