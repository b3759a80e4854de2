#include "job/resource_need.h"

#include <algorithm>
#include <cmath>
#include <fstream>
#include <limits>

namespace stillfield {
namespace {

constexpr double kProgramBytes = 40e6;

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

}  // namespace

ResourceNeed need_of(const PageShape& shape, const SegmentSettings& settings, int threads) {
  const double classes = settings.classes == kAutoClasses ? 8 : settings.classes;
  const double chains = settings.chains;
  const double at_once = std::min(chains, static_cast<double>(threads));
  const auto pixels = static_cast<double>(shape.pixels());
  const double a_pixel = 16 + chains * (2 + 3 * classes) + 4 * classes * (at_once + 1);
  return {kProgramBytes + pixels * a_pixel, pixels * 1e-5};
}

ResourceNeed need_of(const PageShape& shape, const DenoiseSettings& /*settings*/, int /*threads*/) {
  const auto pixels = static_cast<double>(shape.pixels());
  return {kProgramBytes + pixels * 100 * shape.channels, pixels * 1e-5};
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
