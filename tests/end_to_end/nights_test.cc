// Runs that are left alone overnight: killed, split up, out of space, short of memory.
//
// STILLFIELD_KILLS and STILLFIELD_KILL_IMAGES make the kill test longer (20 and 12, by hand).
#include <signal.h>
#include <unistd.h>

#include <algorithm>
#include <atomic>
#include <catch2/catch.hpp>
#include <chrono>
#include <cstdlib>
#include <thread>

#include "end_to_end/program.h"
#include "end_to_end/results.h"
#include "end_to_end/scene.h"
#include "random/stream.h"

using namespace stillfield;
using namespace stillfield::test;
using Catch::Matchers::Contains;

namespace {

using Clock = std::chrono::steady_clock;

const Arguments kFast = {"--no-bootstrap", "--max-sweeps", "600", "--coupling", "0.8"};

void save_scenes(const fs::path& folder, int images, int width = 40) {
  for (int i = 0; i < images; ++i) {
    const std::string name = (i % 2 == 0 ? "a" : "b/c") + std::to_string(i) + ".png";
    save_png(folder / name, draw_scene({width, 30, 2, static_cast<std::uint32_t>(40 + i)}));
  }
}

Arguments command(const fs::path& in, const fs::path& out, const Arguments& more = {}) {
  Arguments arguments = {"segment",    in.string(), "--classes", "2",      "--out",
                         out.string(), "--threads", "1",         "--quick"};
  arguments.insert(arguments.end(), kFast.begin(), kFast.end());
  arguments.insert(arguments.end(), more.begin(), more.end());
  return arguments;
}

int number_from_environment(const char* name, int otherwise) {
  const char* text = std::getenv(name);
  return text == nullptr ? otherwise : std::atoi(text);
}

std::size_t lines_in(const std::string& text) {
  return static_cast<std::size_t>(std::count(text.begin(), text.end(), '\n'));
}

}  // namespace

TEST_CASE("kill -9 at random moments, resumed each time: the bytes of an undisturbed run") {
  const int kills = number_from_environment("STILLFIELD_KILLS", 5);
  const TempFolder folder;
  save_scenes(folder / "in", number_from_environment("STILLFIELD_KILL_IMAGES", 4), 60);
  const auto start = Clock::now();
  REQUIRE(run_program(command(folder / "in", folder / "undisturbed")).code == 0);
  const std::chrono::duration<double> whole = Clock::now() - start;
  const Tree expected = results_in(folder / "undisturbed");

  RandomStream random({20261201, 4}, Purpose::kSimulation);
  int with_leftovers = 0;
  for (int done = 0; done < kills;) {
    RunningProgram program(command(folder / "in", folder / "out"));
    std::this_thread::sleep_for(random.uniform() * 0.4 * whole);
    if (program.has_ended()) {  // all images done: from the start again
      REQUIRE(program.wait().code == 0);
      CHECK(differences(expected, results_in(folder / "out")) == "");
      fs::remove_all(folder / "out");
      continue;
    }
    program.signal(SIGKILL);
    program.wait();
    ++done;
    if (fs::exists(folder / "out")) with_leftovers += leftovers(folder / "out").empty() ? 0 : 1;
  }
  const Ended last = run_program(command(folder / "in", folder / "out"));
  CHECK(last.code == 0);
  CHECK(leftovers(folder / "out").empty());
  CHECK(differences(expected, results_in(folder / "out")) == "");
  WARN(kills << " kills within " << whole.count() << " s; " << with_leftovers
             << " left temporary files, none was there at the end");
}

TEST_CASE("parts at the same time, and the report on them: the bytes of one run") {
  const TempFolder folder;
  save_scenes(folder / "in", 5);
  save_png(folder / "in/b/caf\xe9.png", draw_scene({40, 30, 2, 50}));
  save_png(folder / "more/a0.png", draw_scene({40, 30, 2, 51}));
  const std::string more = (folder / "more/a0.png").string();
  REQUIRE(run_program(command(folder / "in", folder / "one", {more})).code == 0);
  const fs::path out = folder / "parts";
  {
    RunningProgram first(command(folder / "in", out, {more, "--shard", "1/3"}));
    RunningProgram second(command(folder / "in", out, {more, "--shard", "2/3"}));
    CHECK(first.wait().code == 0);
    CHECK(second.wait().code == 0);
  }
  const Ended early = run_program({"report", out.string()});
  CHECK(early.code == 1);
  CHECK_THAT(early.err, Contains("part 3 of 3 has not ended yet"));
  CHECK(run_program(command(folder / "in", out, {more, "--shard", "3/3"})).code == 0);
  const Ended report = run_program({"report", out.string()});
  INFO(report.err);
  CHECK(report.code == 0);
  CHECK(get(out / "run.json") == get(folder / "one/run.json"));
  Tree parts = results_in(out);
  for (const char* number : {"1", "2", "3"}) {
    CHECK(parts.erase("shard-" + std::string(number) + "-of-3.json") == 1);
  }
  CHECK(differences(results_in(folder / "one"), parts) == "");

  SECTION("parts of other settings are not put together") {
    CHECK(run_program(command(folder / "in", out, {more, "--shard", "3/3", "--seed", "8"})).code ==
          0);
    CHECK_THAT(run_program({"report", out.string()}).err, Contains("part of another run"));
  }
  SECTION("a whole run goes on from the parts, and replaces their run files") {
    const Ended whole = run_program(command(folder / "in", out, {more}));
    CHECK_THAT(whole.out, Contains("0 done, 7 finished before"));
    CHECK(differences(results_in(folder / "one"), results_in(out)) == "");
  }
  SECTION("lost tables come back; without a run file, from the records alone") {
    for (const char* name : {"measurements.csv", "summary.csv", "particles.csv"}) {
      fs::remove(folder / "one" / name);
    }
    CHECK(run_program({"report", (folder / "one").string()}).code == 0);
    CHECK(differences(results_in(folder / "one"), parts) == "");
    fs::remove(folder / "one/run.json");
    fs::remove(folder / "one/measurements.csv");
    CHECK(run_program({"report", (folder / "one").string()}).code == 0);
    CHECK(lines_in(get(folder / "one/measurements.csv")) ==
          lines_in(get(out / "measurements.csv")));
    fs::remove(folder / "one/b/c1.record.json");
    CHECK_THAT(run_program({"report", (folder / "one").string()}).err, Contains("c1.record.json"));
  }
}

TEST_CASE("two whole runs in one folder: the second says so and does nothing") {
  const TempFolder folder;
  save_scenes(folder / "in", 4, 60);
  RunningProgram first(command(folder / "in", folder / "out"));
  while (!fs::exists(folder / "out/a0.record.json") && !first.has_ended()) {
    std::this_thread::sleep_for(std::chrono::milliseconds(2));
  }
  const Ended second = run_program(command(folder / "in", folder / "out"));
  CHECK(second.code == 2);
  CHECK_THAT(second.err, Contains("another run is at work"));
  CHECK(first.wait().code == 0);
}

TEST_CASE("a full disk: one sentence for the image, nothing of it written, the others done") {
  const TempFolder folder;
  save_scenes(folder / "in", 3);
  save_png(folder / "in/b/large.png", draw_scene({400, 320, 2, 9}));
  Arguments arguments = {"-c", "ulimit -f 120; exec \"$@\"", "sh", STILLFIELD_PROGRAM};
  const Arguments run = command(folder / "in", folder / "out");
  arguments.insert(arguments.end(), run.begin(), run.end());
  const Ended ended = run_program(arguments, "/bin/sh");  // 120 blocks of 512 bytes a file
  CHECK(ended.code == 1);
  CHECK_THAT(ended.err, Contains("b/large.") && Contains("writing the TIFF failed"));
  CHECK(lines_in(ended.err) == 1);
  CHECK_THAT(ended.out, Contains("4 images: 3 done, 1 failed"));
  CHECK(result_files(folder / "out/b", "large") == 0);
  CHECK(leftovers(folder / "out").empty());
  CHECK(read_json(folder / "out/run.json")["counts"]["failed"] == 1);
  CHECK_THAT(run_program(run).out, Contains("1 done, 3 finished before"));
}

TEST_CASE(
    "a folder that may not be listed, loops of links, and a file that grows while it is read") {
  const TempFolder folder;
  save_scenes(folder / "in", 1);
  fs::create_directory_symlink("..", folder / "in/up");
  fs::create_symlink("self.png", folder / "in/self.png");
  put(folder / "in/grows.pgm", "P5 2000 1500 255\n" + std::string(3000000, 'x'));
  std::atomic<bool> stop = false;
  std::thread writer([&] {
    while (!stop) {
      std::ofstream(folder / "in/grows.pgm", std::ios::binary | std::ios::app) << "x";
      std::this_thread::sleep_for(std::chrono::microseconds(100));
    }
  });
  const Ended ended = run_program(command(folder / "in", folder / "out"));
  stop = true;
  writer.join();
  CHECK(ended.code == 1);
  CHECK_THAT(ended.err,
             Contains("grows.pgm: the file changed while it was read") && Contains("self.png: "));
  CHECK(lines_in(ended.err) == 2);
  CHECK_THAT(ended.out, Contains("3 images: 1 done, 2 failed"));

  fs::create_directory(folder / "in/closed");
  fs::permissions(folder / "in/closed", fs::perms::none);
  fs::permissions(folder.path(), fs::perms::all);
  for (const char* name : {"grows.pgm", "self.png"}) fs::remove(folder / "in" / name);
  Arguments arguments = {"--reuid", "65534", "--clear-groups", STILLFIELD_PROGRAM};
  if (::geteuid() != 0) arguments = {STILLFIELD_PROGRAM};
  const fs::path program = ::geteuid() == 0 ? "/usr/bin/setpriv" : "/usr/bin/env";
  const Arguments run = command(folder / "in", folder / "as-nobody");
  arguments.insert(arguments.end(), run.begin(), run.end());
  const Ended closed = run_program(arguments, program);
  fs::permissions(folder / "in/closed", fs::perms::all);
  if (closed.code > 100) {
    WARN("skipped: the program cannot be run as another user here");
    return;
  }
  CHECK(closed.code == 1);
  CHECK_THAT(closed.err, Contains("closed: the folder cannot be listed (Permission denied)"));
  CHECK(lines_in(closed.err) == 1);
  CHECK_THAT(closed.out, Contains("2 images: 1 done, 1 failed"));
}

TEST_CASE("an image that needs more memory than allowed is refused by its header") {
  const TempFolder folder;
  save_scenes(folder / "in", 1);
  put(folder / "in/huge.pgm", "P5 30000 30000 255\nxxx");
  const Ended ended = run_program(command(folder / "in", folder / "out", {"--memory", "4GB"}));
  CHECK(ended.code == 1);
  CHECK_THAT(ended.err, Contains("huge.pgm: 30000 x 30000 pixels need about") &&
                            Contains("4.0 GB may be used"));
  CHECK(lines_in(ended.err) == 1);
  CHECK_THAT(ended.out, Contains("2 images: 1 done, 1 failed"));
  CHECK_THAT(run_program(command(folder / "in", folder / "out", {"--memory", "4"})).err,
             Contains("must be an amount of memory with its unit"));
}

TEST_CASE("a dry run lists and writes nothing; a log has a line for each event") {
  const TempFolder folder;
  save_scenes(folder / "in", 2);
  put(folder / "in/broken.png", "no picture");
  const Ended before = run_program(command(folder / "in", folder / "out", {"--dry-run"}));
  CHECK(before.code == 1);
  CHECK_THAT(before.out, Contains("a0.png (40 x 30, ") && Contains(": to do") &&
                             Contains("broken.png: ") &&
                             Contains("2 to do, 0 finished before, 1 that would fail") &&
                             Contains("Estimated time"));
  CHECK_FALSE(fs::exists(folder / "out"));
  fs::remove(folder / "in/broken.png");

  const std::string log = (folder / "night.log").string();
  CHECK(run_program(command(folder / "in", folder / "out", {"--log", log})).code == 0);
  const std::string lines = get(log);
  CHECK(lines_in(lines) == 6);  // begin and end of the run and of two images
  CHECK_THAT(lines, Contains("Z run into ") && Contains("Z begin 1 of 2: ") &&
                        Contains("Z done in ") && Contains("Z run ended: 2 done"));
  CHECK_THAT(run_program(command(folder / "in", folder / "out", {"--dry-run"})).out,
             Contains("0 to do, 2 finished before"));
  CHECK_THAT(run_program(command(folder / "in", folder / "o", {"--log", "/proc/no/log"})).err,
             Contains("/proc/no/log: the log cannot be written"));
}

TEST_CASE("a changed mask in a folder of masks does its image again, and no other") {
  const TempFolder folder;
  save_scenes(folder / "in", 2);
  save_png(folder / "masks/a0.png", draw_scene({40, 30, 1, 1}));
  save_png(folder / "masks/b/c1.png", draw_scene({40, 30, 1, 2}));
  const Arguments masks = {"--mask", (folder / "masks").string()};
  CHECK(run_program(command(folder / "in", folder / "out", masks)).code == 0);
  save_png(folder / "masks/b/c1.png", draw_scene({40, 30, 1, 3}));
  CHECK_THAT(run_program(command(folder / "in", folder / "out", masks)).out,
             Contains("1 done, 1 finished before"));
}

TEST_CASE("a key of the settings file that is no option is one sentence") {
  const TempFolder folder;
  save_scenes(folder / "in", 1);
  put(folder / "lab.toml", "[segment]\nmax-sweps = 700\n\n[denoise]\npatch = 6\n");
  const std::string config = (folder / "lab.toml").string();
  const Ended wrong = run_program(command(folder / "in", folder / "out", {"--config", config}));
  CHECK(wrong.code == 2);
  CHECK_THAT(wrong.err, Contains("max-sweps"));
  put(folder / "lab.toml", "[segment]\nmax-sweeps = 700\nseed = 4\n\n[denoise]\npatch = 6\n");
  const Ended right =
      run_program(command(folder / "in", folder / "out", {"--config", config, "--seed", "6"}));
  CHECK(right.code == 0);
  const auto settings = read_json(folder / "out/a0.record.json")["settings"];
  CHECK(settings["max_sweeps"] == 600);  // of the command line
  CHECK(settings["seed"] == 6);
}
