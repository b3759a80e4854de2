#include "report/csv_read.h"

#include "core/error.h"

namespace stillfield {
namespace {

[[noreturn]] void throw_at(int line, const std::string& what) {
  throw Error(ErrorKind::kInput, "line " + std::to_string(line) + ": " + what);
}

}  // namespace

std::vector<CsvRow> parse_csv(std::string_view text) {
  if (text.starts_with("\xEF\xBB\xBF")) text.remove_prefix(3);
  std::vector<CsvRow> rows;
  CsvRow row;
  std::string field;
  int line = 1;
  bool quoted = false;  // inside quotes
  bool closed = false;  // after them
  const auto end_field = [&] {
    row.fields.push_back(std::move(field));
    field.clear();
    closed = false;
  };
  const auto end_row = [&] {
    const bool empty = row.fields.empty() && field.empty() && !closed;
    if (!empty) {
      end_field();
      rows.push_back(std::move(row));
    }
    row = {line + 1, {}};
  };
  for (std::size_t i = 0; i < text.size(); ++i) {
    const char c = text[i];
    const bool next_is_quote = i + 1 < text.size() && text[i + 1] == '"';
    if (quoted) {
      if (c != '"') {
        field += c;
        line += c == '\n' ? 1 : 0;
      } else if (next_is_quote) {
        field += c;
        ++i;
      } else {
        quoted = false;
        closed = true;
      }
    } else if (c == ',') {
      end_field();
    } else if (c == '\n') {
      end_row();
      ++line;
    } else if (c == '\r' && i + 1 < text.size() && text[i + 1] == '\n') {
      continue;
    } else if (c == '"' && field.empty() && !closed) {
      quoted = true;
    } else if (c == '"' || closed) {
      throw_at(line,
               "a quote inside a field; a field with quotes stands in quotes, its own doubled");
    } else {
      field += c;
    }
  }
  if (quoted) throw_at(row.line, "a quoted field does not end");
  end_row();
  return rows;
}

}  // namespace stillfield
