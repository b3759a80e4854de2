#include "report/csv.h"

#include <catch2/catch.hpp>
#include <cstdlib>
#include <limits>

#include "report/csv_reader.h"

using namespace stillfield;
using stillfield::test::CsvRows;
using stillfield::test::read_csv;

TEST_CASE("fields with commas, quotes and line breaks are quoted as in RFC 4180") {
  CsvTable table("h");
  table.start_row();
  for (const char* field : {"aaa", "b\r\nbb", "b\"bb", "x,y", "", " plain text "}) table.add(field);
  // Rules 6 and 7 of section 2 give the second and the third field.
  CHECK(table.text() == "h\naaa,\"b\r\nbb\",\"b\"\"bb\",\"x,y\",, plain text \n");
  CHECK(read_csv(table.text()) ==
        CsvRows{{"h"}, {"aaa", "b\r\nbb", "b\"bb", "x,y", "", " plain text "}});
}

TEST_CASE("numbers are short and read back as the same double") {
  CsvTable table("h");
  table.start_row();
  const double tricky[] = {0.1, 1.0 / 3, 1e23, 5e-324, -0.0, 123456789.0, 9007199254740993.0};
  for (const double value : tricky) table.add(value);
  table.add(std::int64_t{-7});
  const auto row = read_csv(table.text()).at(1);
  CHECK(row.front() == "0.1");
  CHECK(row.back() == "-7");
  for (std::size_t i = 0; i < std::size(tricky); ++i) {
    CHECK(std::strtod(row[i].c_str(), nullptr) == tricky[i]);
  }
}

TEST_CASE("what is not a finite number is an empty field") {
  CsvTable table("h");
  table.start_row();
  table.add(std::numeric_limits<double>::quiet_NaN());
  table.add(std::numeric_limits<double>::infinity());
  table.add(1.5);
  CHECK(table.text() == "h\n,,1.5\n");
}
