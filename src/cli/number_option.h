// Checks of option values that answer with a sentence.
//
// Each function returns an empty string for a good value, else what is wrong with it; the
// command line puts the option's name before it.
#ifndef STILLFIELD_CLI_NUMBER_OPTION_H_
#define STILLFIELD_CLI_NUMBER_OPTION_H_

#include <cstdint>
#include <functional>
#include <optional>
#include <string>

namespace stillfield {

std::optional<std::uint64_t> parse_whole(const std::string& text);
std::optional<double> parse_number(const std::string& text);

// A whole number of lowest..highest.
std::function<std::string(const std::string&)> whole_number(std::uint64_t lowest,
                                                            std::uint64_t highest);

// auto or a whole number of lowest..highest.
std::function<std::string(const std::string&)> auto_or_whole(std::uint64_t lowest,
                                                             std::uint64_t highest);

// auto, sampled or a number from 0 to kLargestCoupling.
inline constexpr double kLargestCoupling = 5;
std::string check_coupling(const std::string& text);

// auto, none or a number of pixels from 0.2 to 3.
std::string check_blur(const std::string& text);

// auto, none or a whole number from 4 to 12.
std::string check_shading(const std::string& text);

// A length with its unit, 320nm, 0.32um (or with a micro sign) or 0.00032mm, in micrometres;
// greater than 0.
std::optional<double> parse_length_um(const std::string& text);
std::string check_length(const std::string& text);

// An amount of memory with its unit, 4GB, 1.5GB, 500MB (10^9 and 10^6 bytes; GiB and MiB too), in
// bytes; at least a megabyte.
std::optional<std::int64_t> parse_memory(const std::string& text);
std::string check_memory(const std::string& text);

}  // namespace stillfield

#endif  // STILLFIELD_CLI_NUMBER_OPTION_H_
