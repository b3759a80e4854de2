#include "report/run.h"

#include <fstream>

#include "core/error.h"
#include "report/json_archive.h"
#include "report/versions.h"

namespace stillfield {
namespace {

constexpr char kFormat[] = "stillfield run 1";
constexpr int kDepthOfImages = 2;  // objects in an array in an object

// Text as it stands `indent` spaces further in.
std::string indented(const Json& json, int indent) {
  const std::string text = json.dump(2, ' ', false, Json::error_handler_t::replace);
  std::string out;
  for (const char c : text) {
    out += c;
    if (c == '\n') out.append(static_cast<std::size_t>(indent), ' ');
  }
  return out;
}

}  // namespace

template <class Archive>
void describe(Archive& archive, RunImage& image) {
  archive("image", image.image);
  archive("page", image.page);
  archive("input", image.input);
  archive("status", image.status);
  archive("sentence", image.sentence);
  archive("converged", image.converged);
  archive("group", image.group);
  archive("verdict", image.verdict);
  archive("reasons", image.reasons);
  archive("record", image.record);
}

template <class Archive>
void describe(Archive& archive, RunHead& head) {
  archive.constant("format", kFormat);
  archive.constant("program", kProgramName);
  archive("version", head.version);
  archive("command", head.command);
  archive("settings", head.settings);
}

std::string run_head(const RunHead& head) {
  Json json = to_json(head);
  if (head.shards > 0) json["shard"] = {{"number", head.shard}, {"of", head.shards}};
  std::string text = indented(json, 0);
  text.resize(text.size() - 2);  // the end of the object
  return text + ",\n  \"images\": [";
}

std::string run_image(const RunImage& image, bool first) {
  return std::string(first ? "" : ",") + "\n    " + indented(to_json(image), 4);
}

std::string run_tail(const std::vector<NamedValue>& counts) {
  Json object = Json::object();
  for (const NamedValue& count : counts) {
    std::visit([&](const auto& value) { object[count.name] = value; }, count.value);
  }
  return "\n  ],\n  \"counts\": " + indented(object, 2) + "\n}\n";
}

RunHead read_run(const std::filesystem::path& file,
                 const std::function<void(RunImage image)>& see) {
  std::ifstream stream(file, std::ios::binary);
  // Images are handed out as soon as they are complete, and not kept.
  const auto hand_out = [&see](int depth, Json::parse_event_t event, Json& json) {
    if (event != Json::parse_event_t::object_end || depth != kDepthOfImages) return true;
    RunImage image;
    JsonReader reader(json);
    describe(reader, image);
    see(std::move(image));
    return false;
  };
  try {
    const Json json = Json::parse(stream, hand_out);
    if (json.at("format") != kFormat) throw Error(ErrorKind::kInput, "");
    RunHead head;
    JsonReader reader(json);
    describe(reader, head);
    if (json.contains("shard")) {
      head.shard = json["shard"].at("number").get<int>();
      head.shards = json["shard"].at("of").get<int>();
    }
    return head;
  } catch (const std::exception&) {
    throw Error(ErrorKind::kInput, file.string() +
                                       ": is no run file of this program, or a damaged one; run "
                                       "the command again, finished images are skipped");
  }
}

std::string command_of_run(const std::filesystem::path& file) {
  std::error_code ignored;
  if (!std::filesystem::exists(file, ignored)) return {};
  try {
    return read_run(file, [](const RunImage&) {}).command;
  } catch (const Error&) {
    return {};
  }
}

}  // namespace stillfield
