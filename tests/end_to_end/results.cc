#include "end_to_end/results.h"

#include "image/temp_folder.h"

namespace stillfield::test {
namespace {

bool ends_with(const std::string& text, const std::string& tail) {
  return text.size() >= tail.size() &&
         text.compare(text.size() - tail.size(), tail.size(), tail) == 0;
}

}  // namespace

Tree results_in(const fs::path& folder) {
  Tree tree;
  for (const auto& entry : fs::recursive_directory_iterator(folder)) {
    if (!entry.is_regular_file()) continue;
    const std::string name = entry.path().lexically_relative(folder).generic_string();
    if (name == "run.json") continue;
    std::string content = get(entry.path());
    if (ends_with(name, ".record.json")) {
      auto json = nlohmann::ordered_json::parse(content);
      json.erase("run");
      content = json.dump();
    }
    tree[name] = content;
  }
  return tree;
}

std::string differences(const Tree& a, const Tree& b) {
  std::string list;
  for (const auto& [name, content] : a) {
    const auto other = b.find(name);
    if (other == b.end()) {
      list += name + " is missing; ";
    } else if (other->second != content) {
      list += name + " differs; ";
    }
  }
  for (const auto& [name, content] : b) {
    if (a.find(name) == a.end()) list += name + " is too many; ";
  }
  return list;
}

std::size_t result_files(const fs::path& folder, const std::string& name) {
  std::size_t count = 0;
  for (const std::string& suffix : kResultSuffixes) count += fs::exists(folder / (name + suffix));
  return count;
}

nlohmann::ordered_json read_json(const fs::path& file) {
  return nlohmann::ordered_json::parse(get(file));
}

std::vector<std::string> leftovers(const fs::path& folder) {
  std::vector<std::string> names;
  for (const auto& entry : fs::recursive_directory_iterator(folder)) {
    const std::string name = entry.path().filename().string();
    if (name.rfind('.', 0) == 0) names.push_back(name);
  }
  return names;
}

}  // namespace stillfield::test
