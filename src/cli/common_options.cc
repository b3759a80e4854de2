#include "cli/common_options.h"

#include <algorithm>
#include <cstdio>
#include <thread>

#include "cli/progress.h"
#include "cli/signals.h"
#include "core/error.h"
#include "simd/target.h"

namespace stillfield {
namespace {

std::string check_shard(const std::string& text) {
  return parse_shard(text) ? "" : "must be I/N with I from 1 to N, such as 2/5, not '" + text + "'";
}

void print_dry_run(const FolderCounts& counts) {
  std::printf("%d to do, %d finished before, %d that would fail; nothing was written.\n",
              counts.done, counts.skipped, counts.failed);
  if (counts.done == 0) return;
  std::printf("Estimated time: %s, %s.\n", duration_text(counts.seconds_to_do).c_str(),
              counts.skipped > 0 ? "at the speed of the images finished before"
                                 : "a rough figure that knows neither the images nor the machine");
}

void print_summary(const FolderCounts& counts, const CommonOptions& options, const char* advice) {
  const int all = counts.done + counts.skipped + counts.failed + counts.not_reached;
  std::printf("%d %s: %d done", all, all == 1 ? "image" : "images", counts.done);
  if (counts.skipped > 0) std::printf(", %d finished before", counts.skipped);
  if (counts.failed > 0) std::printf(", %d failed", counts.failed);
  if (counts.not_reached > 0) std::printf(", %d not reached", counts.not_reached);
  std::printf(".\n");
  if (counts.not_converged > 0) {
    std::printf(
        "%d did not converge: the \"verdict\" in NAME.record.json says what is missing; %s\n",
        counts.not_converged, advice);
  }
  if (counts.check_failed > 0) {
    std::printf("%d failed a model check: checks.csv says which, and what it means.\n",
                counts.check_failed);
  }
  if (options.run.shard) {
    std::printf("This was part %s; when all have ended: stillfield report %s\n",
                options.shard.c_str(), options.output.c_str());
  } else {
    std::printf("Results are in %s: measurements.csv, summary.csv, run.json and the maps.\n",
                options.output.c_str());
  }
  if (counts.interrupted) {
    std::printf("Stopped on request; the same command again continues where this one ended.\n");
  }
}

}  // namespace

CLI::Option* add_choice(CLI::App& app, const char* name, std::string& value,
                        const std::vector<std::string>& choices, const char* help) {
  std::string list;
  for (const std::string& choice : choices) list += (list.empty() ? "" : "|") + choice;
  const auto check = [choices, list](const std::string& text) -> std::string {
    const bool known = std::find(choices.begin(), choices.end(), text) != choices.end();
    return known ? "" : "must be one of " + list + ", not '" + text + "'";
  };
  return app.add_option(name, value, help)
      ->check(CLI::Validator(check, "", ""))
      ->type_name(list)
      ->capture_default_str();
}

void add_inputs_and_output(CLI::App& app, CommonOptions& options) {
  app.add_option("INPUT", options.inputs, "Image files and folders of images")
      ->required()
      ->type_name("");
  app.add_option("--out", options.output, "Folder for the results, made if need be")
      ->required()
      ->type_name("DIR");
}

void add_run_options(CLI::App& app, CommonOptions& options) {
  options.run.threads = static_cast<int>(std::max(1u, std::thread::hardware_concurrency()));
  add_whole(app, "--threads", options.run.threads, 1, 1024, "Threads; results do not depend on it")
      ->default_str("all cores");
  app.add_option("--cpu-target", options.cpu_target,
                 "Instruction set, auto or one that `stillfield info` lists; results do not depend "
                 "on it")
      ->type_name("NAME")
      ->capture_default_str();
  app.add_option("--group", options.group_file,
                 "Groups of images for summary.csv, from a table with the columns `image` and "
                 "`group`; without it the folders are the groups")
      ->type_name("FILE.csv");
  app.add_option("--group-column", options.run.group_column, "Column of --group that has the group")
      ->type_name("NAME")
      ->capture_default_str();
  add_whole(app, "--max-pixels", options.run.limits.max_pixels, 1, std::uint64_t{1} << 34,
            "Refuse pages with more pixels");
  add_whole(app, "--max-pages", options.run.limits.max_pages, 1, std::uint64_t{1} << 20,
            "Refuse files with more pages");
  app.add_option("--memory", options.memory,
                 "Refuse images that need more than this, say 4GB or 500MB; otherwise all that is "
                 "free when the run begins")
      ->check(CLI::Validator(check_memory, "", ""))
      ->type_name("SIZE");
  app.add_option("--shard", options.shard,
                 "Do part I of N of the images, chosen by their names; parts may run at the same "
                 "time, on one machine or several. Then: stillfield report DIR")
      ->check(CLI::Validator(check_shard, "", ""))
      ->type_name("I/N");
  app.add_option("--log", options.log, "Add a line with the time to this file for each event")
      ->type_name("FILE");
  app.add_flag("--dry-run", options.run.dry_run,
               "List what would be done, and an estimate of the time; write nothing");
  app.add_flag("--redo", options.run.redo, "Do again what is finished");
  app.add_flag("--strict", options.strict,
               "Exit code 3 if a result did not converge or failed a model check");
  app.add_flag("--quiet", options.quiet, "Write nothing but errors to the terminal");
}

int run_command(CommonOptions& options, int max_sweeps, const char* advice,
                const FolderCommand& command) {
  options.run.output = options.output;
  options.run.group_file = options.group_file;
  options.run.shard = parse_shard(options.shard);
  options.run.memory = parse_memory(options.memory).value_or(0);
  force_cpu_target(options.cpu_target);
  catch_stop_signals();
  const bool dry = options.run.dry_run;
  FolderCounts counts;
  {
    Progress progress(options.quiet, max_sweeps, dry ? std::string() : options.log);
    progress.log().line("run into " + options.output +
                        (options.run.shard ? ", part " + options.shard : std::string()));
    try {
      counts = command(progress);
    } catch (const Error& error) {
      progress.log().line(std::string("run ended: ") + error.what());
      throw;
    }
    progress.log().line("run ended: " + std::to_string(counts.done) + " done, " +
                        std::to_string(counts.skipped) + " finished before, " +
                        std::to_string(counts.failed) + " failed, " +
                        std::to_string(counts.not_reached) + " not reached");
  }
  if (!options.quiet && dry) print_dry_run(counts);
  if (!options.quiet && !dry) print_summary(counts, options, advice);
  if (counts.interrupted) return kExitInterrupted;
  if (counts.failed > 0) return kExitSomeFailed;
  const bool doubts = counts.not_converged + counts.check_failed > 0;
  return options.strict && doubts && !dry ? kExitNotConverged : kExitAllDone;
}

}  // namespace stillfield
