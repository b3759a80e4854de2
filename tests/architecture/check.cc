#include "architecture/check.h"

#include <algorithm>
#include <cctype>
#include <regex>
#include <set>

#include "architecture/rooms.h"

namespace stillfield::architecture {
namespace {

struct Pattern {
  std::regex regex;
  std::string what;
};

bool ends_with(const std::string& text, const std::string& tail) {
  return text.size() >= tail.size() &&
         text.compare(text.size() - tail.size(), tail.size(), tail) == 0;
}

void report_matches(const SourceFile& file, const Pattern& pattern, Violations& violations) {
  int number = 0;
  for (const std::string& line : lines_of(code_only(file.text))) {
    ++number;
    if (std::regex_search(line, pattern.regex)) {
      violations.push_back({file.path, number, pattern.what});
    }
  }
}

std::string guard_name(const std::string& path) {
  std::string name = "STILLFIELD_";
  for (const char c : path) {
    const auto u = static_cast<unsigned char>(c);
    name += std::isalnum(u) != 0 ? static_cast<char>(std::toupper(u)) : '_';
  }
  return name + "_";
}

}  // namespace

Violations check_place(const SourceFile& file) {
  Violations violations;
  if (room_place(room_of(file.path)) < 0) {
    violations.push_back({file.path, 1, "lies in no room"});
  }
  if (!ends_with(file.path, ".h") && !ends_with(file.path, ".cc")) {
    violations.push_back({file.path, 1, "C++ files are named .h or .cc"});
  }
  return violations;
}

Violations check_includes(const SourceFile& file) {
  Violations violations;
  const std::string room = room_of(file.path);
  for (const Include& include : includes_of(file.text)) {
    if (!include.quoted) {
      const std::string objection = outside_header_objection(room, include.header);
      if (!objection.empty()) violations.push_back({file.path, include.line, objection});
      continue;
    }
    const int place = room_place(room_of(include.header));
    if (place < 0) {
      violations.push_back({file.path, include.line,
                            "\"" + include.header + "\" is no path \"room/file.h\" below src/"});
    } else if (place > room_place(room)) {
      violations.push_back(
          {file.path, include.line, "\"" + include.header + "\" is in a room below " + room});
    }
  }
  return violations;
}

Violations check_length(const SourceFile& file) {
  const auto lines = static_cast<int>(lines_of(file.text).size());
  if (lines <= kMaxLines) return {};
  return {{file.path, lines, "is longer than " + std::to_string(kMaxLines) + " lines"}};
}

Violations check_guard(const SourceFile& file) {
  if (!ends_with(file.path, ".h")) return {};
  const std::string name = guard_name(file.path);
  // Headers compiled once for each CPU target toggle their guard instead (Highway's idiom).
  const std::regex plain("^\\s*#ifndef " + name + "\\s+#define " + name + "\\s");
  const std::regex toggled("^\\s*#if defined\\(" + name + "\\) == defined\\(HWY_TARGET_TOGGLE\\)");
  const std::string code = code_only(file.text);
  if (std::regex_search(code, ends_with(file.path, "-inl.h") ? toggled : plain)) return {};
  return {{file.path, 1, "does not start with the include guard " + name}};
}

Violations check_numbers(const SourceFile& file) {
  static const Pattern kDistribution = {
      std::regex(R"(\b(std::)?\w+_distribution\s*[<{( ])"),
      "distributions of <random> differ between standard libraries: use random/"};
  static const Pattern kLibm = {
      std::regex(R"((^|[^\w.>:])(std::|::)?(exp|exp2|expm1|log|log2|log10|log1p|pow|sin|cos|tan)"
                 R"(|asin|acos|atan|atan2|sinh|cosh|tanh|asinh|acosh|atanh|erf|erfc|tgamma|lgamma)"
                 R"(|cbrt|hypot|fma)[fl]?\s*\()"),
      "libm differs between CPUs: use core/elementary.h"};
  static const Pattern kEigenLibm = {
      std::regex(R"((\.|->)(exp|log|sin|cos|tanh)\(\s*\)|\.pow\()"),
      "element-wise functions of Eigen differ between CPUs: use core/elementary.h"};
  static const Pattern kFused = {
      std::regex(R"(\b(MulAdd|MulSub|NegMulAdd|NegMulSub|ApproximateReciprocal\w*)\s*\()"),
      "fused and approximate operations differ between CPUs: use Mul, Add and Div"};
  Violations violations;
  report_matches(file, kDistribution, violations);
  if (on_the_chains_path(room_of(file.path))) {
    report_matches(file, kLibm, violations);
    report_matches(file, kEigenLibm, violations);
  }
  if (room_of(file.path) == "simd") report_matches(file, kFused, violations);
  return violations;
}

Violations check_manners(const SourceFile& file) {
  static const Pattern kPrint = {
      std::regex(R"(\b(std::w?(cout|cerr|clog)|(v?f?printf|f?puts|putchar|fputc|perror)\s*\())"),
      "only cli prints"};
  static const Pattern kExit = {
      std::regex(R"((^|[^\w.>:])(std::|::)?(exit|_exit|_Exit|quick_exit|abort|terminate)\s*\()"),
      "only cli ends the process: throw stillfield::Error"};
  static const Pattern kMat = {std::regex(R"(\bcv::(U?Mat)\w*)"),
                               "cv::Mat stays in image and measure"};
  Violations violations;
  const std::string room = room_of(file.path);
  if (room != "cli") {
    report_matches(file, kPrint, violations);
    report_matches(file, kExit, violations);
  }
  if (room != "image" && room != "measure") report_matches(file, kMat, violations);
  return violations;
}

Violations check_all(const SourceFile& file) {
  Violations all;
  for (const auto check :
       {check_place, check_includes, check_length, check_guard, check_numbers, check_manners}) {
    const Violations some = check(file);
    all.insert(all.end(), some.begin(), some.end());
  }
  return all;
}

bool reading_path_leads(const std::vector<SourceFile>& files, const std::string& start,
                        const std::vector<std::string>& targets) {
  std::set<std::string> rooms = {room_of(start)};
  for (const std::string& target : targets) rooms.insert(room_of(target));
  std::set<std::string> seen = {start};
  std::vector<std::string> open = {start};
  while (!open.empty()) {
    const std::string path = open.back();
    open.pop_back();
    const auto file = std::find_if(files.begin(), files.end(),
                                   [&](const SourceFile& f) { return f.path == path; });
    if (file == files.end()) continue;
    for (const Include& include : includes_of(file->text)) {
      const std::string& header = include.header;
      if (std::find(targets.begin(), targets.end(), header) != targets.end()) return true;
      if (!include.quoted || rooms.count(room_of(header)) == 0) continue;
      const std::string body = header.substr(0, header.rfind('.')) + ".cc";
      for (const std::string& next : {header, body}) {
        if (seen.insert(next).second) open.push_back(next);
      }
    }
  }
  return false;
}

}  // namespace stillfield::architecture
