#include "cli/number_option.h"

#include <charconv>
#include <cmath>
#include <string_view>
#include <utility>

#include "model/blur.h"
#include "model/spline_surface.h"

namespace stillfield {
namespace {

template <class T>
std::optional<T> parse(const std::string& text) {
  T value{};
  const char* end = text.data() + text.size();
  const auto [stop, error] = std::from_chars(text.data(), end, value);
  return error == std::errc{} && stop == end ? std::optional(value) : std::nullopt;
}

}  // namespace

std::optional<std::uint64_t> parse_whole(const std::string& text) {
  return parse<std::uint64_t>(text);
}

std::optional<double> parse_number(const std::string& text) {
  return parse<double>(text);
}

std::function<std::string(const std::string&)> whole_number(std::uint64_t lowest,
                                                            std::uint64_t highest) {
  return [lowest, highest](const std::string& text) -> std::string {
    const auto value = parse_whole(text);
    if (value && *value >= lowest && *value <= highest) return {};
    return "must be a whole number from " + std::to_string(lowest) + " to " +
           std::to_string(highest) + ", not '" + text + "'";
  };
}

std::function<std::string(const std::string&)> auto_or_whole(std::uint64_t lowest,
                                                             std::uint64_t highest) {
  return [lowest, highest](const std::string& text) -> std::string {
    if (text == "auto" || whole_number(lowest, highest)(text).empty()) return {};
    return "must be auto or a whole number from " + std::to_string(lowest) + " to " +
           std::to_string(highest) + ", not '" + text + "'";
  };
}

std::string check_coupling(const std::string& text) {
  if (text == "auto" || text == "sampled") return {};
  const auto value = parse_number(text);
  if (value && *value >= 0 && *value <= kLargestCoupling) return {};
  return "must be auto, sampled or a number from 0 to 5, not '" + text + "'";
}

std::string check_blur(const std::string& text) {
  if (text == "auto" || text == "none") return {};
  const auto value = parse_number(text);
  if (value && *value >= kSmallestBlur && *value <= kLargestBlur) return {};
  return "must be auto, none or a number of pixels from 0.2 to 3, not '" + text + "'";
}

std::string check_shading(const std::string& text) {
  if (text == "none" || auto_or_whole(kLeastSurfaceSide, kMostSurfaceSide)(text).empty()) {
    return {};
  }
  return "must be auto, none or a whole number from " + std::to_string(kLeastSurfaceSide) + " to " +
         std::to_string(kMostSurfaceSide) + ", not '" + text + "'";
}

std::optional<double> parse_length_um(const std::string& text) {
  // The micro sign (U+00B5) and the Greek letter mu (U+03BC) look alike.
  constexpr std::pair<std::string_view, double> kUnits[] = {
      {"nm", 1e-3}, {"um", 1.0}, {"\xc2\xb5m", 1.0}, {"\xce\xbcm", 1.0}, {"mm", 1e3}};
  for (const auto& [unit, micrometres] : kUnits) {
    if (!text.ends_with(unit)) continue;
    const auto value = parse_number(text.substr(0, text.size() - unit.size()));
    if (!value || !std::isfinite(*value) || *value <= 0) return std::nullopt;
    return *value * micrometres;
  }
  return std::nullopt;
}

std::string check_length(const std::string& text) {
  if (parse_length_um(text)) return {};
  return "must be a length above 0 with its unit, such as 0.32um, 320nm or 0.00032mm, not '" +
         text + "'";
}

std::optional<std::int64_t> parse_memory(const std::string& text) {
  constexpr double kLeast = 1e6;
  constexpr double kMost = 1e18;
  constexpr std::pair<std::string_view, double> kUnits[] = {
      {"MB", 1e6}, {"GB", 1e9}, {"TB", 1e12}, {"MiB", 1048576.0}, {"GiB", 1073741824.0}};
  for (const auto& [unit, bytes] : kUnits) {
    if (!text.ends_with(unit)) continue;
    const auto value = parse_number(text.substr(0, text.size() - unit.size()));
    const double all = value.value_or(0) * bytes;
    if (!(all >= kLeast && all <= kMost)) return std::nullopt;
    return static_cast<std::int64_t>(all);
  }
  return std::nullopt;
}

std::string check_memory(const std::string& text) {
  if (parse_memory(text)) return {};
  return "must be an amount of memory with its unit, such as 4GB or 500MB, not '" + text + "'";
}

}  // namespace stillfield
