// Reads comma-separated values by the grammar of RFC 4180, section 2; lines end in LF or CRLF, a
// byte order mark and empty lines are skipped.
#ifndef STILLFIELD_REPORT_CSV_READ_H_
#define STILLFIELD_REPORT_CSV_READ_H_

#include <string>
#include <string_view>
#include <vector>

namespace stillfield {

struct CsvRow {
  int line = 1;  // of the text, where the row begins
  std::vector<std::string> fields;
};

// Throws Error(kInput), without a file name, if a quote is out of place or does not end.
std::vector<CsvRow> parse_csv(std::string_view text);

}  // namespace stillfield

#endif  // STILLFIELD_REPORT_CSV_READ_H_
