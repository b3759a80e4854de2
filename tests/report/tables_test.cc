#include "report/tables.h"

#include <catch2/catch.hpp>
#include <cstdlib>

#include "report/check_table.h"
#include "report/csv_reader.h"
#include "report/record_sample.h"
#include "report/run.h"

using namespace stillfield;
using namespace stillfield::test;

namespace {

double number(const std::string& text) {
  return std::strtod(text.c_str(), nullptr);
}

std::string field(const CsvRows& rows, std::size_t row, const std::string& column) {
  for (std::size_t i = 0; i < rows.at(0).size(); ++i) {
    if (rows[0][i] == column) return rows.at(row).at(i);
  }
  return "no column " + column;
}

std::vector<ImageRecord> fields(const std::vector<double>& fractions) {
  std::vector<ImageRecord> records;
  for (const double fraction : fractions) {
    records.push_back(record_sample(std::string("f") + std::to_string(records.size()) + ".png"));
    records.back().measurements = {area_fraction(1, fraction, 0.01),
                                   area_fraction(2, 1 - fraction, 0.01)};
  }
  return records;
}

}  // namespace

TEST_CASE("measurements are tidy: a row each, all columns, names quoted") {
  const std::vector<ImageRecord> records = {record_sample()};
  const CsvRows rows = read_csv(measurements_csv(records));
  REQUIRE(rows.size() == 3);
  CHECK(rows[0] == std::vector<std::string>{"image", "page", "class", "measurement", "unit",
                                            "estimate", "sd", "lower90", "upper90", "lower95",
                                            "upper95", "mcse", "rhat", "ess", "plain_estimate",
                                            "defined_share"});
  for (const auto& row : rows) CHECK(row.size() == rows[0].size());
  CHECK(field(rows, 1, "image") == "heat/a, \"b\".tif");
  CHECK(field(rows, 1, "page") == "2");
  CHECK(field(rows, 2, "class") == "2");
  CHECK(number(field(rows, 2, "estimate")) == 0.75);
  CHECK(number(field(rows, 1, "ess")) == 412.5);
}

TEST_CASE("checks are tidy: a row each, with the verdict on the image and a state") {
  const CsvRows rows = read_csv(checks_csv(std::vector<ImageRecord>{record_sample()}));
  REQUIRE(rows.size() == 3);
  CHECK(rows[0] == std::vector<std::string>{"image", "page", "verdict", "check", "class", "value",
                                            "expected", "limit", "p_value", "state", "sentence"});
  CHECK(field(rows, 1, "verdict") == "look");
  CHECK(field(rows, 1, "state") == "grave");
  CHECK(field(rows, 1, "sentence") == "noise is correlated, very");
  CHECK(number(field(rows, 1, "value")) == 0.25);
  CHECK(field(rows, 2, "check") == "class_contrast");
  CHECK(number(field(rows, 2, "class")) == 1);
  CHECK(field(rows, 2, "p_value").empty());
  CHECK(field(rows, 2, "state") == "passed");
}

TEST_CASE("a table of no image has its header") {
  CHECK(read_csv(checks_csv({})).size() == 1);
  CHECK(read_csv(measurements_csv({})).size() == 1);
  CHECK(read_csv(summary_csv({})).size() == 1);
}

// Mean .3, s = .1, t(.975, 2) = 4.302653 (NIST/SEMATECH e-Handbook of Statistical Methods,
// 1.3.6.7.2), half-width 4.302653 * .1 / sqrt 3 = .248414.
TEST_CASE("the folder's interval is that of ASTM E562") {
  const CsvRows rows = read_csv(summary_csv(fields({0.2, 0.3, 0.4})));
  REQUIRE(rows.size() == 3);
  CHECK(field(rows, 1, "measurement") == "area_fraction");
  CHECK(field(rows, 1, "n") == "3");
  CHECK(number(field(rows, 1, "mean")) == Approx(0.3));
  CHECK(number(field(rows, 1, "s")) == Approx(0.1));
  CHECK(number(field(rows, 1, "ci95")) == Approx(0.248414).epsilon(1e-5));
  CHECK(number(field(rows, 1, "relative_accuracy_percent")) == Approx(82.8047).epsilon(1e-5));
  CHECK(number(field(rows, 1, "within_field_sd")) == Approx(0.01));
  CHECK(field(rows, 1, "basis") == "between fields");
  CHECK(number(field(rows, 1, "further_fields_for_10_percent")) > 30);
  CHECK(field(rows, 2, "class") == "2");
}

TEST_CASE("one field has no scatter, and its row says what the interval rests on") {
  const CsvRows rows = read_csv(summary_csv(fields({0.2})));
  CHECK(field(rows, 1, "s").empty());
  CHECK(field(rows, 1, "basis") == "one field: posterior only");
  CHECK(field(rows, 1, "further_fields_for_10_percent").empty());
}

TEST_CASE("run.json lists every image in the order of the run") {
  RunSummary run;
  run.version = "0.1.0";
  run.command = "segment";
  run.settings = {{"classes", std::uint64_t{2}}};
  run.counts = {{"done", std::uint64_t{1}}, {"failed", std::uint64_t{1}}};
  run.images = {{"a.png", 1, "done", "", true, "north", "sound", {}, "a.record.json"},
                {"b.png", 1, "failed", "b.png: is empty", false, "", "", {}, ""}};
  CHECK_THAT(run_text(run), Catch::Matchers::Contains("\"status\": \"failed\"") &&
                                Catch::Matchers::Contains("\"sentence\": \"b.png: is empty\"") &&
                                Catch::Matchers::Contains("\"done\": 1"));
}

// By hand: north .2 .4, mean .3, s .1 sqrt 2; south .6 alone; all three mean .4, s .2.
TEST_CASE("the summary has a block for all fields and one for each group") {
  const std::vector<std::string> groups = {"north", "south", "north"};
  const CsvRows rows = read_csv(summary_csv(fields({0.2, 0.6, 0.4}), groups));
  REQUIRE(rows.size() == 7);
  CHECK(rows[0][0] == "group");
  const std::vector<std::string> names = {"(all)", "(all)", "north", "north", "south", "south"};
  for (std::size_t i = 0; i < names.size(); ++i) CHECK(field(rows, i + 1, "group") == names[i]);
  CHECK(number(field(rows, 1, "mean")) == Approx(0.4));
  CHECK(number(field(rows, 1, "s")) == Approx(0.2));
  CHECK(field(rows, 3, "n") == "2");
  CHECK(number(field(rows, 3, "mean")) == Approx(0.3));
  CHECK(number(field(rows, 3, "s")) == Approx(0.141421).epsilon(1e-5));
  CHECK(number(field(rows, 3, "within_field_sd")) == Approx(0.01));
  CHECK(field(rows, 5, "n") == "1");
  CHECK(field(rows, 5, "basis") == "one field: posterior only");
  CHECK(number(field(rows, 6, "mean")) == Approx(0.4));
}

TEST_CASE("one group alone has no block of its own") {
  const std::vector<std::string> groups = {"north", "north"};
  CHECK(read_csv(summary_csv(fields({0.2, 0.6}), groups)).size() == 3);
}
