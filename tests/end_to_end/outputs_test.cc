// What stands in the files: maps, record, tables.
#include <catch2/catch.hpp>
#include <cmath>
#include <cstdlib>

#include "end_to_end/program.h"
#include "end_to_end/results.h"
#include "end_to_end/scene.h"
#include "image/digest.h"
#include "image/read.h"
#include "image/write.h"
#include "report/csv_reader.h"

using namespace stillfield;
using namespace stillfield::test;
using Catch::Matchers::Contains;

namespace {

double number(const std::string& text) {
  return std::strtod(text.c_str(), nullptr);
}

}  // namespace

TEST_CASE("maps agree with each other and with the record") {
  const TempFolder folder;
  const int classes = 3;
  save_png(folder / "in/a.png", draw_scene({96, 80, classes, 4}));
  REQUIRE(segment(folder / "in", classes, folder / "out").code == 0);
  const fs::path out = folder / "out";
  const auto record = read_json(out / "a.record.json");

  const Field labels = read_page(out / "a.labels.tif");
  const Field entropy = read_page(out / "a.entropy.tif");
  REQUIRE(count_pages(out / "a.probability.tif") == classes);
  std::vector<Field> probability;
  for (int k = 0; k < classes; ++k) probability.push_back(read_page(out / "a.probability.tif", k));
  CHECK(labels.format == SampleFormat{SampleKind::kUnsigned, 8});
  CHECK(entropy.format == SampleFormat{SampleKind::kFloat, 32});

  double wrong_sum = 0;
  double wrong_entropy = 0;
  int wrong_labels = 0;
  int uncertain = 0;
  for (int y = 0; y < 80; ++y) {
    for (int x = 0; x < 96; ++x) {
      double sum = 0;
      double bits = 0;
      int best = 0;
      for (int k = 0; k < classes; ++k) {
        const double p = probability[static_cast<std::size_t>(k)].pixels.at(x, y);
        sum += p;
        if (p > 0) bits -= p * std::log2(p);
        if (p > probability[static_cast<std::size_t>(best)].pixels.at(x, y)) best = k;
      }
      wrong_sum = std::max(wrong_sum, std::fabs(sum - 1));
      wrong_entropy = std::max(wrong_entropy, std::fabs(bits - entropy.pixels.at(x, y)));
      wrong_labels += labels.pixels.at(x, y) != static_cast<float>(best + 1);
      uncertain += probability[static_cast<std::size_t>(best)].pixels.at(x, y) < 0.9F;
    }
  }
  CHECK(wrong_sum < 1e-6);
  CHECK(wrong_entropy < 1e-5);
  CHECK(wrong_labels == 0);
  CHECK(record["probability"]["uncertain_share"].get<double>() == uncertain / (96.0 * 80.0));

  const Field preview = read_page(out / "a.labels.png");
  CHECK(preview.channels_in_file == 3);
  CHECK(preview.pixels.extent() == labels.pixels.extent());
}

TEST_CASE("the number of classes may be left to the data, and groups of images summed up apart") {
  const TempFolder folder;
  save_png(folder / "in/x/a.png", draw_scene({96, 80, 3, 4}));
  save_png(folder / "in/y/flat.png", draw_scene({64, 48, 1, 5}));
  const auto segmented = [&](const fs::path& out, const std::vector<std::string>& more) {
    std::vector<std::string> words = {
        "segment", (folder / "in").string(), "--classes", "auto", "--out", out.string(), "--quick"};
    words.insert(words.end(), more.begin(), more.end());
    return run_program(words);
  };
  REQUIRE(segmented(folder / "out", {}).code == 0);
  const auto record = read_json(folder / "out/x/a.record.json");
  CHECK(record["settings"]["classes"] == "auto");
  CHECK(record["class_choice"]["used"] == 3);
  CHECK(record["class_choice"]["best_explained_by"] == 3);
  CHECK(record["class_choice"]["tried"].size() == 5);
  CHECK(record["class_choice"]["runner_up"].is_number());
  CHECK(record["model"]["classes"].size() == 3);
  CHECK(count_pages(folder / "out/x/a.probability.tif") == 3);
  const auto flat = read_json(folder / "out/y/flat.record.json");
  CHECK(flat["class_choice"]["used"] == 2);
  CHECK(flat["class_choice"]["best_explained_by"] == 1);
  CHECK_THAT(flat["verdict"]["sentences"].dump(), Contains("One class explains the image"));

  const CsvRows by_folder = read_csv(get(folder / "out/summary.csv"));
  CHECK(by_folder.at(1).at(0) == "(all)");
  CHECK(by_folder.back().at(0) == "y");
  put(folder / "groups.csv", "image,heat\nflat.png,7\n");
  const std::vector<std::string> grouped = {"--group", (folder / "groups.csv").string(),
                                            "--group-column", "heat"};
  REQUIRE(segmented(folder / "out", grouped).code == 0);
  CHECK(read_csv(get(folder / "out/summary.csv")).back().at(0) == "7");
  put(folder / "groups.csv", "image,heat\nb.png,7\n");
  const Ended wrong = segmented(folder / "out", grouped);
  CHECK(wrong.code != 0);
  CHECK_THAT(wrong.err, Contains("groups.csv: line 2: names `b.png`"));
}

TEST_CASE("the record holds settings, digests, diagnostics, verdict and cautions") {
  const TempFolder folder;
  save_tiff16(folder / "in/a.tif", draw_scene({64, 48, 2, 4, 1000, 400, 120}));
  REQUIRE(segment(folder / "in", 2, folder / "out", {"--seed", "7"}).code == 0);
  const auto record = read_json(folder / "out/a.record.json");
  CHECK(record["program"] == "stillfield");
  CHECK(record["settings"]["classes"] == 2);
  CHECK(record["settings"]["seed"] == 7);
  CHECK(record["settings"]["coupling"] == "auto");
  CHECK(record["settings"]["max_rhat"] == 1.05);
  CHECK(record["input"]["path"] == "a.tif");
  CHECK(record["input"]["sha256"] == sha256_of_file(folder / "in/a.tif"));
  CHECK(record["input"]["bytes"] == fs::file_size(folder / "in/a.tif"));
  CHECK(record["input"]["samples"] == "16-bit unsigned integer");
  CHECK(record["input"]["width"] == 64);
  CHECK(record["libraries"].contains("libtiff"));
  CHECK(record["coupling_tried"].size() > 3);
  CHECK(record["model"]["classes"].size() == 2);
  CHECK(record["model"]["classes"][0]["mean"]["mean"].get<double>() == Approx(1000).margin(60));
  CHECK(record["scalars"].size() == 7);  // 3 a class, and equal_neighbours
  CHECK(record["measurements"].size() == 6 + 7 * 2);
  CHECK(record["schedule"]["sampling_sweeps"].get<int>() >= 144);
  CHECK(record["verdict"]["converged"].is_boolean());
  CHECK(record["cautions"].dump().find("Not a medical device") != std::string::npos);
  REQUIRE(record["outputs"].size() == 5);
  for (const auto& output : record["outputs"]) {
    const fs::path file = folder / ("out/a" + output["suffix"].get<std::string>());
    CHECK(output["sha256"] == sha256_of_file(file));
    CHECK(output["bytes"] == fs::file_size(file));
  }
}

TEST_CASE("tables: a row each, fractions of an image sum to 1, the summary is their mean") {
  const TempFolder folder;
  save_png(folder / "in/a, \"b\".png", draw_scene({64, 48, 2, 4}));
  save_png(folder / "in/c.png", draw_scene({64, 48, 2, 5}));
  REQUIRE(segment(folder / "in", 2, folder / "out").code == 0);
  const CsvRows rows = read_csv(get(folder / "out/measurements.csv"));
  REQUIRE(rows.size() == 1 + 2 * 20);
  CHECK(rows[1][0] == "a, \"b\".png");
  double sum = 0;
  double of_class_1 = 0;
  for (const auto& row : rows) {
    REQUIRE(row.size() == 16);
    if (row[3] != "area_fraction") continue;
    sum += number(row[5]);
    if (row[2] == "1") of_class_1 += number(row[5]);
    CHECK(number(row[9]) <= number(row[7]));
    CHECK(number(row[7]) <= number(row[5]));
    CHECK(number(row[5]) <= number(row[8]));
    CHECK(number(row[8]) <= number(row[10]));
    CHECK(row[14] == row[5]);
  }
  CHECK(sum == Approx(2).epsilon(1e-9));
  const CsvRows summary = read_csv(get(folder / "out/summary.csv"));
  REQUIRE(summary.size() == 1 + 20);
  CHECK(summary[1][1] == "area_fraction");
  CHECK(summary[1][3] == "2");
  CHECK(number(summary[1][5]) == Approx(of_class_1 / 2));
}

TEST_CASE("pages of a file are fields of their own") {
  const TempFolder folder;
  const Volume<float> first = draw_scene({48, 40, 2, 4});
  const Volume<float> second = draw_scene({48, 40, 2, 5});
  write_tiff(folder / "in/stack.tif",
             std::vector<TiffPage<float>>{{first.view(), ""}, {second.view(), ""}});
  CHECK_THAT(segment(folder / "in", 2, folder / "out").out, Contains("2 images: 2 done."));
  CHECK(result_files(folder / "out", "stack.page001") == kResultSuffixes.size());
  CHECK(result_files(folder / "out", "stack.page002") == kResultSuffixes.size());
  const auto record = read_json(folder / "out/stack.page002.record.json");
  CHECK(record["input"]["page"] == 2);
  CHECK(record["input"]["pages"] == 2);
  CHECK(record["image_seed"] != read_json(folder / "out/stack.page001.record.json")["image_seed"]);
  CHECK_THAT(segment(folder / "in", 2, folder / "out").out, Contains("2 finished before"));
}
