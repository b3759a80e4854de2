#include "image/output_names.h"

#include <algorithm>
#include <map>
#include <optional>
#include <set>
#include <string>
#include <string_view>

namespace stillfield {
namespace {

constexpr std::string_view kPageSuffix = ".page";
constexpr std::size_t kPageDigits = 3;

// "a/b" for "a/b.tif"; unknown extensions are part of the name.
std::string plain_name(const InputFile& file) {
  std::filesystem::path name = file.relative;
  if (has_image_extension(name)) name.replace_extension();
  return name.generic_string();
}

// "a/b" for "a/b.page001": the name whose page would be called so.
std::optional<std::string> name_before_page(const std::string& name) {
  const std::size_t at = name.rfind(kPageSuffix);
  if (at == std::string::npos) return std::nullopt;
  const std::string_view digits = std::string_view(name).substr(at + kPageSuffix.size());
  const bool numbered = digits.size() >= kPageDigits &&
                        digits.find_first_not_of("0123456789") == std::string_view::npos;
  return numbered ? std::optional(name.substr(0, at)) : std::nullopt;
}

}  // namespace

void assign_output_names(std::vector<InputFile>& files) {
  std::map<std::string, int> uses;
  for (const auto& file : files) {
    if (file.failure.empty()) ++uses[plain_name(file)];
  }

  const auto clashes = [&uses](const std::string& name) {
    const auto before_page = name_before_page(name);
    return uses.at(name) > 1 || (before_page && uses.contains(*before_page));
  };
  // Names without a clash come first, so that no other file can take them.
  std::set<std::string> taken;
  for (auto& file : files) {
    if (!file.failure.empty()) continue;
    const std::string name = plain_name(file);
    file.output = clashes(name) ? std::filesystem::path() : std::filesystem::path(name);
    if (!file.output.empty()) taken.insert(name);
  }
  for (auto& file : files) {
    if (!file.output.empty() || !file.failure.empty()) continue;
    const std::string whole = file.relative.generic_string();
    std::string name = whole;
    for (int n = 2; !taken.insert(name).second; ++n) name = whole + "-" + std::to_string(n);
    file.output = name;
  }
}

std::filesystem::path output_stem(const InputFile& file, int page, int pages) {
  if (pages <= 1) return file.output;
  std::string number = std::to_string(page + 1);
  number.insert(0, kPageDigits - std::min(kPageDigits, number.size()), '0');
  std::filesystem::path stem = file.output;
  stem += std::string(kPageSuffix) + number;
  return stem;
}

}  // namespace stillfield
