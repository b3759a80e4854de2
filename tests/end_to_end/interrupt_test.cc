// Ctrl-C and kill -9 in the middle of a folder.
#include <signal.h>

#include <catch2/catch.hpp>
#include <chrono>
#include <thread>

#include "end_to_end/program.h"
#include "end_to_end/results.h"
#include "end_to_end/scene.h"

using namespace stillfield::test;
using Catch::Matchers::Contains;

namespace {

constexpr int kImages = 3;

std::string image_name(int i) {
  return "field-" + std::to_string(i);
}

void save_images(const fs::path& folder) {
  for (int i = 0; i < kImages; ++i) {
    save_png(folder / (image_name(i) + ".png"),
             draw_scene({160, 120, 3, static_cast<std::uint32_t>(10 + i)}));
  }
}

// Starts a run, waits for the first finished image, sends the signal.
Ended run_until_first_image(const TempFolder& folder, int signal_number) {
  RunningProgram program({"segment", (folder / "in").string(), "--classes", "3", "--out",
                          (folder / "out").string(), "--quick"});
  while (!fs::exists(folder / ("out/" + image_name(0) + ".record.json")) && !program.has_ended()) {
    std::this_thread::sleep_for(std::chrono::milliseconds(2));
  }
  program.signal(signal_number);
  return program.wait();
}

int finished_images(const fs::path& out) {
  int finished = 0;
  for (int i = 0; i < kImages; ++i) finished += fs::exists(out / (image_name(i) + ".record.json"));
  return finished;
}

}  // namespace

TEST_CASE("Ctrl-C: finished images whole, the half-done one absent, the next run goes on") {
  const TempFolder folder;
  save_images(folder / "in");
  REQUIRE(segment(folder / "in", 3, folder / "undisturbed").code == 0);
  const Tree expected = results_in(folder / "undisturbed");

  for (const int signal_number : {SIGINT, SIGTERM}) {
    CAPTURE(signal_number);
    fs::remove_all(folder / "out");
    const Ended ended = run_until_first_image(folder, signal_number);
    CHECK(ended.code == 130);
    CHECK_THAT(ended.out, Contains("not reached") && Contains("continues"));
    const int finished = finished_images(folder / "out");
    CHECK(finished >= 1);
    REQUIRE(finished < kImages);
    for (int i = 0; i < kImages; ++i) {
      const std::size_t files = result_files(folder / "out", image_name(i));
      CHECK((files == 0 || files == kResultSuffixes.size()));
    }
    CHECK(leftovers(folder / "out").empty());
    CHECK(read_json(folder / "out/run.json")["counts"]["not_reached"] == kImages - finished);
    CHECK(fs::exists(folder / "out/measurements.csv"));

    const Ended second = segment(folder / "in", 3, folder / "out");
    CHECK(second.code == 0);
    CHECK_THAT(second.out, Contains(std::to_string(kImages - finished) + " done, " +
                                    std::to_string(finished) + " finished before"));
    CHECK(differences(expected, results_in(folder / "out")) == "");
  }

  fs::remove_all(folder / "out");
  CHECK(run_until_first_image(folder, SIGKILL).code == 128 + SIGKILL);
  REQUIRE(finished_images(folder / "out") < kImages);
  CHECK(segment(folder / "in", 3, folder / "out").code == 0);
  CHECK(leftovers(folder / "out").empty());
  CHECK(differences(expected, results_in(folder / "out")) == "");
}
