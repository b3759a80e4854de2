// Comma-separated values.
//
// Quoting  a field with a comma, a quote or a line break stands in quotes, its quotes doubled
//          [RFC 4180, section 2, rules 5 to 7]; lines end in LF rather than the RFC's CRLF
// Numbers  the shortest decimal that reads back as the same double, whatever the locale; an empty
//          field for NaN and infinities
#ifndef STILLFIELD_REPORT_CSV_H_
#define STILLFIELD_REPORT_CSV_H_

#include <cstdint>
#include <string>
#include <string_view>
#include <utility>

namespace stillfield {

class CsvTable {
 public:
  // `header` is the first line, without its line break.
  explicit CsvTable(std::string_view header) : text_(header) {}

  void start_row() { separator_ = '\n'; }
  void add(std::string_view field);
  void add(double number);
  void add(std::int64_t number);

  // The table with its final line break.
  std::string text() const { return text_ + '\n'; }

  // What has been added since the last call, for tables that are written row by row; the line
  // break of the last row is still to come.
  std::string take() { return std::exchange(text_, {}); }

 private:
  void separate();

  std::string text_;
  char separator_ = '\n';
};

}  // namespace stillfield

#endif  // STILLFIELD_REPORT_CSV_H_
