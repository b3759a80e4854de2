// Reads comma-separated values by the grammar of RFC 4180, section 2, with LF or CRLF line ends.
#ifndef STILLFIELD_TESTS_REPORT_CSV_READER_H_
#define STILLFIELD_TESTS_REPORT_CSV_READER_H_

#include <stdexcept>
#include <string>
#include <vector>

namespace stillfield::test {

using CsvRows = std::vector<std::vector<std::string>>;

inline CsvRows read_csv(const std::string& text) {
  CsvRows rows(1, {""});
  bool quoted = false;
  for (std::size_t i = 0; i < text.size(); ++i) {
    const char c = text[i];
    std::string& field = rows.back().back();
    if (quoted && c == '"' && i + 1 < text.size() && text[i + 1] == '"') {
      field += '"';
      ++i;
    } else if (c == '"') {
      if (!quoted && !field.empty()) throw std::runtime_error("a quote inside a bare field");
      quoted = !quoted;
    } else if (quoted) {
      field += c;
    } else if (c == ',') {
      rows.back().emplace_back();
    } else if (c == '\n') {
      if (i + 1 < text.size()) rows.push_back({""});
    } else if (c != '\r') {
      field += c;
    }
  }
  if (quoted) throw std::runtime_error("a quoted field does not end");
  return rows;
}

}  // namespace stillfield::test

#endif  // STILLFIELD_TESTS_REPORT_CSV_READER_H_
