#include "report/run.h"

#include <fstream>

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
  archive("group", image.group);
  archive("verdict", image.verdict);
  archive("reasons", image.reasons);
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

std::string command_of_run(const std::filesystem::path& file) {
  std::ifstream stream(file, std::ios::binary);
  const Json json = Json::parse(stream, nullptr, false);
  const auto text = [&json](const char* key) {
    const bool there = json.is_object() && json.contains(key) && json[key].is_string();
    return there ? json[key].get<std::string>() : std::string();
  };
  return text("program") == kProgramName ? text("command") : std::string();
}

}  // namespace stillfield
