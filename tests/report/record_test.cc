#include "report/record.h"

#include <catch2/catch.hpp>
#include <cmath>
#include <nlohmann/json.hpp>

#include "image/temp_folder.h"
#include "report/record_sample.h"

using namespace stillfield;
using namespace stillfield::test;
using Catch::Matchers::Contains;
using nlohmann::ordered_json;

TEST_CASE("a record reads back as it was written") {
  const ImageRecord record = record_sample();
  const std::string text = record_text(record);
  const ImageRecord again = parse_record(text);
  CHECK(record_text(again) == text);
  CHECK(again.settings == record.settings);
  CHECK(again.input.path == record.input.path);
  CHECK(again.input.notes == record.input.notes);
  CHECK(again.measurements.at(1).estimate == 0.75);
  CHECK(again.scalars.at(0).summary.ess_tail == 430);
  CHECK(again.schedule.stopped_by_limit);
  CHECK(again.outputs.at(0).bytes == 999);
  CHECK(again.blur.lower90 == 0.7);
  CHECK(again.blur.modelled);
  CHECK(again.shading.lowest == 0.875);
  CHECK(again.shading.modelled);
}

TEST_CASE("keys have a fixed order, and what differs between equal runs is in one object") {
  const ordered_json json = ordered_json::parse(record_text(record_sample()));
  std::vector<std::string> keys;
  for (const auto& item : json.items()) keys.push_back(item.key());
  CHECK(keys == std::vector<std::string>{"format",      "program",      "command",
                                         "version",     "libraries",    "settings_digest",
                                         "input",       "settings",     "image_seed",
                                         "grey_levels", "class_choice", "model",
                                         "blur",        "shading",      "coupling_tried",
                                         "schedule",    "scalars",      "probability",
                                         "bootstrap",   "verdict",      "assessment",
                                         "checks",      "measurements", "outputs",
                                         "cautions",    "run"});
  ImageRecord other = record_sample();
  other.run = {"scalar", 4, 9, 9, 9};
  ordered_json other_json = ordered_json::parse(record_text(other));
  CHECK(other_json != json);
  other_json["run"] = json["run"];
  CHECK(other_json == json);
}

TEST_CASE("the record of a restored image holds its noise and none of the label field") {
  const std::string text = record_text(restoration_sample());
  const ordered_json json = ordered_json::parse(text);
  CHECK_FALSE(json.contains("model"));
  CHECK(json["restoration"]["channels"].size() == 2);
  CHECK(json["restoration"]["channels"][0]["noise"]["gain"] == 0.5);
  CHECK(json["restoration"]["channels"][0]["noise"]["sd"].is_null());
  const ImageRecord again = parse_record(text);
  CHECK(record_text(again) == text);
  CHECK(again.restoration.channels.at(1).missing == 1);
}

TEST_CASE("NaN and infinity are null in the file and NaN when read") {
  const std::string text = record_text(record_sample());
  const ordered_json json = ordered_json::parse(text);
  CHECK(json["input"]["pixel_size_um"].is_null());
  CHECK(json["scalars"][1]["mean"].is_null());
  CHECK(json["scalars"][1]["rhat"].is_null());
  CHECK(std::isnan(parse_record(text).scalars.at(1).summary.rhat));
}

TEST_CASE("whole numbers of 64 bits survive") {
  const ordered_json json = ordered_json::parse(record_text(record_sample()));
  CHECK(json["settings"]["seed"].get<std::uint64_t>() == ~std::uint64_t{0});
  CHECK(json["settings"]["min_ess"].is_number_float());
}

TEST_CASE("a file name that is not UTF-8 does not break the record") {
  const std::string text = record_text(record_sample("caf\xe9.tif"));
  CHECK(parse_record(text).input.path == "caf\xef\xbf\xbd.tif");
}

TEST_CASE("damaged and foreign records are refused with a sentence that names the file") {
  const TempFolder folder;
  const std::string text = record_text(record_sample());
  const auto refused = [&folder](const std::string& content) {
    put(folder / "r.record.json", content);
    return sentence_of(ErrorKind::kInput, [&] { read_record(folder / "r.record.json"); });
  };
  CHECK_THAT(refused(text.substr(0, text.size() / 2)),
             Contains("r.record.json") && Contains("is no complete record"));
  CHECK_THAT(refused("{}"), Contains("is no complete record"));
  CHECK_THAT(refused("[1, 2]"), Contains("is no complete record"));
  CHECK_THAT(refused(R"({"format": "something else"})"), Contains("of another kind"));
  CHECK_THAT(refused(""), Contains("r.record.json"));
  ordered_json wrong = ordered_json::parse(text);
  wrong["schedule"]["sampling_sweeps"] = "many";
  CHECK_THAT(refused(wrong.dump()), Contains("is no complete record"));
  CHECK_THAT(sentence_of(ErrorKind::kInput, [&] { read_record(folder / "gone.json"); }),
             Contains("gone.json"));
}

TEST_CASE("the digest of settings depends on each of them, on the input and on the page") {
  std::vector<NamedValue> settings = record_sample().settings;
  const std::string input(64, 'b');
  const std::string digest = settings_digest(settings, input, 1);
  CHECK(digest.size() == 64);
  CHECK(settings_digest(settings, input, 1) == digest);
  CHECK(settings_digest(settings, input, 2) != digest);
  CHECK(settings_digest(settings, std::string(64, 'c'), 1) != digest);
  settings[0].value = std::uint64_t{3};
  CHECK(settings_digest(settings, input, 1) != digest);
}
