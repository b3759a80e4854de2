#include "cli/number_option.h"

#include <charconv>

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

}  // namespace stillfield
