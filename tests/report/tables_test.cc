#include "report/tables.h"

#include <catch2/catch.hpp>
#include <cstdlib>
#include <nlohmann/json.hpp>

#include "image/temp_folder.h"
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

std::string measurements_csv(const std::vector<ImageRecord>& records) {
  CsvTable table = measurements_table();
  for (const ImageRecord& record : records) add_measurements(record, table);
  return table.text();
}

std::string checks_csv(const std::vector<ImageRecord>& records) {
  CsvTable table = checks_table();
  for (const ImageRecord& record : records) add_checks(record, table);
  return table.text();
}

std::string summary_csv(const std::vector<ImageRecord>& records,
                        const std::vector<std::string>& groups = {}) {
  SummaryTable table;
  for (std::size_t i = 0; i < records.size(); ++i) {
    table.add(records[i], groups.empty() ? "." : groups[i]);
  }
  return table.text();
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

TEST_CASE("run.json lists every image in the order of the run, and is read back image by image") {
  const RunHead head{"0.1.0", "segment", {{"classes", std::uint64_t{2}}}, 2, 3};
  const std::vector<RunImage> images = {
      {"a\n.png", 1, 1, "done", "", true, "north", "sound", {"one", "two"}, "a.record.json"},
      {"b.png", 3, 2, "failed", "b.png: is empty", false, "", "", {}, ""}};
  std::string text = run_head(head);
  for (const RunImage& image : images) text += run_image(image, &image == &images.front());
  text += run_tail({{"done", std::uint64_t{1}}, {"failed", std::uint64_t{1}}});
  // As one piece, but for arrays, which the library's own dump sets alike.
  CHECK(nlohmann::ordered_json::parse(text).dump(2) + "\n" == text);
  CHECK_THAT(text, Catch::Matchers::Contains("\"sentence\": \"b.png: is empty\"") &&
                       Catch::Matchers::Contains("\"done\": 1"));

  const TempFolder folder;
  put(folder / "run.json", text);
  std::vector<RunImage> seen;
  const RunHead read = read_run(folder / "run.json", [&](RunImage i) { seen.push_back(i); });
  CHECK(read.settings == head.settings);
  CHECK(read.shard == 2);
  CHECK(read.shards == 3);
  REQUIRE(seen.size() == 2);
  CHECK(seen[0].image == "a\n.png");
  CHECK(seen[0].reasons == std::vector<std::string>{"one", "two"});
  CHECK(seen[1].page == 3);
  CHECK(command_of_run(folder / "run.json") == "segment");
  put(folder / "run.json", text.substr(0, text.size() / 2));
  CHECK(command_of_run(folder / "run.json").empty());
  CHECK(command_of_run(folder / "none.json").empty());
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
