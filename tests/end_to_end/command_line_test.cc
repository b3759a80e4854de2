// Options, help, exit codes.
#include <catch2/catch.hpp>

#include "end_to_end/program.h"
#include "end_to_end/results.h"
#include "end_to_end/scene.h"

using namespace stillfield::test;
using Catch::Matchers::Contains;
using Catch::Matchers::StartsWith;

TEST_CASE("version, help and info") {
  const Ended version = run_program({"--version"});
  CHECK(version.code == 0);
  CHECK_THAT(version.out, StartsWith("stillfield "));
  const Ended help = run_program({"--help"});
  CHECK(help.code == 0);
  CHECK_THAT(help.out, Contains("Exit codes") && Contains("segment") && Contains("Examples"));
  const Ended options = run_program({"segment", "--help"});
  CHECK(options.code == 0);
  for (const char* name : {"--classes",    "--out",        "--neighbours", "--coupling",
                           "--variance",   "--chains",     "--seed",       "--threads",
                           "--max-sweeps", "--quick",      "--redo",       "--strict",
                           "--quiet",      "--pixel-size", "--min-area",   "--particle-neighbours",
                           "--mask",       "--replicates", "--no-bootstrap", "--cpu-target", "--max-pixels", "--config"}) {
    CHECK_THAT(options.out, Contains(name));
  }
  const Ended info = run_program({"info"});
  CHECK(info.code == 0);
  CHECK_THAT(info.out, Contains("cpu target ") && Contains("OpenCV") && Contains("reads"));
  CHECK_FALSE(listed_cpu_targets().empty());
}

TEST_CASE("wrong usage is exit code 2 with a sentence that names the option") {
  const TempFolder folder;
  save_png(folder / "a.png", draw_scene({}));
  const auto refused = [&folder](Arguments more) {
    Arguments all = {"segment", (folder / "a.png").string(), "--out", (folder / "out").string()};
    all.insert(all.end(), more.begin(), more.end());
    const Ended ended = run_program(all);
    CHECK(ended.code == 2);
    CHECK(ended.out.empty());
    CHECK_FALSE(fs::exists(folder / "out"));
    return ended.err;
  };
  CHECK_THAT(refused({}), Contains("--classes"));
  CHECK_THAT(refused({"--classes", "1"}),
             Contains("--classes: must be a whole number from 2 to 64"));
  CHECK_THAT(refused({"--classes", "65"}), Contains("--classes"));
  CHECK_THAT(refused({"--classes", "2", "--neighbours", "6"}), Contains("--neighbours"));
  CHECK_THAT(refused({"--classes", "2", "--coupling", "strong"}), Contains("--coupling"));
  CHECK_THAT(refused({"--classes", "2", "--chains", "1"}), Contains("--chains"));
  CHECK_THAT(refused({"--classes", "2", "--threads", "0"}), Contains("--threads"));
  CHECK_THAT(refused({"--classes", "2", "--max-sweeps", "10"}), Contains("--max-sweeps"));
  CHECK_THAT(refused({"--classes", "2", "--cpu-target", "abacus"}), Contains("abacus"));
  for (const char* length : {"0.32", "um", "-1um", "0um", "1e999um", "3 px", "nanum"}) {
    CHECK_THAT(refused({"--classes", "2", "--pixel-size", length}),
               Contains("--pixel-size: must be a length above 0 with its unit"));
  }
  CHECK_THAT(refused({"--classes", "2", "--min-area", "0"}),
             Contains("--min-area: must be a whole number"));
  CHECK_THAT(refused({"--classes", "2", "--particle-neighbours", "6"}),
             Contains("--particle-neighbours: must be one of 4|8"));
  CHECK_THAT(refused({"--classes", "2", "--sharpen"}), Contains("--sharpen"));
  CHECK(run_program({}).code == 2);
  CHECK_THAT(run_program({"polish"}).err, Contains("polish"));
  CHECK(run_program({"polish"}).code == 2);
}

TEST_CASE("options may stand in a file, and the command line wins") {
  const TempFolder folder;
  save_png(folder / "a.png", draw_scene({}));
  put(folder / "lab.toml", "[segment]\nclasses = 3\nquick = true\nseed = 5\nout = \"" +
                               (folder / "out").string() + "\"\n");
  const std::string config = (folder / "lab.toml").string();
  const Ended ended =
      run_program({"segment", (folder / "a.png").string(), "--config", config, "--seed", "6"});
  INFO(ended.err);
  REQUIRE(ended.code == 0);
  const auto settings = read_json(folder / "out/a.record.json")["settings"];
  CHECK(settings["classes"] == 3);
  CHECK(settings["max_rhat"] == 1.05);
  CHECK(settings["seed"] == 6);

  put(folder / "wrong.toml", "[segment]\nclases = 3\n");
  const Ended wrong =
      run_program({"segment", (folder / "a.png").string(), "--classes", "2", "--out",
                   (folder / "out").string(), "--config", (folder / "wrong.toml").string()});
  CHECK(wrong.code == 2);
  CHECK_THAT(wrong.err, Contains("clases"));
  CHECK(run_program(
            {"segment", (folder / "a.png").string(), "--config", (folder / "gone.toml").string()})
            .code == 2);
}

TEST_CASE("with --strict an image that fails a model check gives exit code 3") {
  const TempFolder folder;
  save_png(folder / "a.png", draw_scene({128, 96, 3, 9}));  // of three classes, two are asked for
  const Arguments arguments = {"segment", (folder / "a.png").string(), "--classes", "2",
                               "--out",   (folder / "out").string(),   "--quick"};
  const Ended plain = run_program(arguments);
  CHECK(plain.code == 0);
  CHECK_THAT(plain.out, Contains("1 failed a model check"));
  Arguments strict = arguments;
  strict.push_back("--strict");
  CHECK(run_program(strict).code == 3);
  const auto image = read_json(folder / "out/run.json")["images"][0];
  CHECK(image["verdict"] != "sound");
  CHECK_THAT(image["reasons"].dump(), Contains("one class too few"));
  const auto record = read_json(folder / "out/a.record.json");
  CHECK(record["assessment"]["check_failed"] == true);
  CHECK(record["checks"].size() > 6);
  CHECK(std::filesystem::file_size(folder / "out/checks.csv") > 500);
}

TEST_CASE("with --strict results that did not converge give exit code 3") {
  const TempFolder folder;
  save_png(folder / "a.png", draw_scene({48, 40, 2, 9}));
  // The tightest targets and the fewest sweeps: this cannot converge.
  const Arguments arguments = {"segment", (folder / "a.png").string(), "--classes",    "2",
                               "--out",   (folder / "out").string(),   "--max-sweeps", "600"};
  const Ended plain = run_program(arguments);
  CHECK(plain.code == 0);
  CHECK_THAT(plain.out, Contains("1 did not converge"));
  Arguments strict = arguments;
  strict.push_back("--strict");
  CHECK(run_program(strict).code == 3);
  const auto verdict = read_json(folder / "out/a.record.json")["verdict"];
  CHECK(verdict["converged"] == false);
  CHECK_THAT(verdict["sentences"].dump(), Contains("--max-sweeps"));
}

TEST_CASE("with --quiet nothing is written, and nothing is drawn without a terminal") {
  const TempFolder folder;
  save_png(folder / "a.png", draw_scene({}));
  const Ended piped = segment(folder / "a.png", 2, folder / "out");
  CHECK(piped.err.empty());
  CHECK_THAT(piped.out, Contains("1 image: 1 done.") && Contains("Results are in"));
  const Ended quiet = segment(folder / "a.png", 2, folder / "out", {"--redo", "--quiet"});
  CHECK(quiet.code == 0);
  CHECK(quiet.out.empty());
  CHECK(quiet.err.empty());
}
