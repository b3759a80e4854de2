// A setting as it stands in a record: its name and its value.
#ifndef STILLFIELD_REPORT_NAMED_VALUE_H_
#define STILLFIELD_REPORT_NAMED_VALUE_H_

#include <cstdint>
#include <string>
#include <variant>

namespace stillfield {

struct NamedValue {
  std::string name;
  std::variant<bool, std::uint64_t, double, std::string> value;

  bool operator==(const NamedValue&) const = default;
};

}  // namespace stillfield

#endif  // STILLFIELD_REPORT_NAMED_VALUE_H_
