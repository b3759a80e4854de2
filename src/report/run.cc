#include "report/run.h"

#include "report/json_archive.h"
#include "report/versions.h"

namespace stillfield {

template <class Archive>
void describe(Archive& archive, RunImage& image) {
  archive("image", image.image);
  archive("page", image.page);
  archive("status", image.status);
  archive("sentence", image.sentence);
  archive("converged", image.converged);
  archive("record", image.record);
}

template <class Archive>
void describe(Archive& archive, RunSummary& run) {
  archive.constant("format", "stillfield run 1");
  archive.constant("program", kProgramName);
  archive("version", run.version);
  archive("command", run.command);
  archive("settings", run.settings);
  archive("counts", run.counts);
  archive("images", run.images);
}

std::string run_text(const RunSummary& run) {
  return json_text(to_json(run));
}

}  // namespace stillfield
