#include "report/csv.h"

#include <array>
#include <charconv>
#include <cmath>

namespace stillfield {

void CsvTable::separate() {
  text_ += separator_;
  separator_ = ',';
}

void CsvTable::add(std::string_view field) {
  separate();
  if (field.find_first_of(",\"\r\n") == std::string_view::npos) {
    text_ += field;
    return;
  }
  text_ += '"';
  for (const char c : field) {
    if (c == '"') text_ += '"';
    text_ += c;
  }
  text_ += '"';
}

void CsvTable::add(double number) {
  separate();
  if (!std::isfinite(number)) return;
  std::array<char, 32> digits;
  const auto end = std::to_chars(digits.data(), digits.data() + digits.size(), number);
  text_.append(digits.data(), end.ptr);
}

void CsvTable::add(std::int64_t number) {
  separate();
  text_ += std::to_string(number);
}

}  // namespace stillfield
