#include "architecture/source_text.h"

#include <algorithm>
#include <cctype>
#include <fstream>
#include <regex>
#include <sstream>

namespace stillfield::architecture {
namespace {

enum class Literals { kKeep, kBlank };

// One pass over the text; each member function consumes one construct at `at_`.
class Blanker {
 public:
  Blanker(const std::string& text, Literals literals)
      : in_(text), out_(text), literals_(literals) {}

  std::string run() {
    while (at_ < in_.size()) {
      if (starts_with("//")) {
        blank_to(in_.find('\n', at_));
      } else if (starts_with("/*")) {
        const std::size_t end = in_.find("*/", at_ + 2);
        blank_to(end == std::string::npos ? end : end + 2);
      } else if (starts_with("R\"") && !after_word()) {
        raw_string();
      } else if (in_[at_] == '"') {
        literal('"');
      } else if (in_[at_] == '\'' && !after_word()) {  // 1'000 is a number, not a literal
        literal('\'');
      } else {
        ++at_;
      }
    }
    return out_;
  }

 private:
  bool starts_with(const char* what) const {
    return in_.compare(at_, std::char_traits<char>::length(what), what) == 0;
  }
  bool after_word() const {
    return at_ > 0 && (std::isalnum(static_cast<unsigned char>(in_[at_ - 1])) != 0);
  }
  void blank_to(std::size_t end) {
    end = std::min(end, in_.size());
    for (; at_ < end; ++at_) {
      if (in_[at_] != '\n') out_[at_] = ' ';
    }
  }
  void pass_literal_to(std::size_t end) {
    end = std::min(end, in_.size());
    if (literals_ == Literals::kBlank) blank_to(end);
    at_ = end;
  }
  void literal(char quote) {
    std::size_t end = at_ + 1;
    while (end < in_.size() && in_[end] != quote && in_[end] != '\n') {
      end += in_[end] == '\\' ? 2 : 1;
    }
    ++at_;
    pass_literal_to(end);
    ++at_;
  }
  void raw_string() {
    const std::size_t open = in_.find('(', at_);
    if (open == std::string::npos) return pass_literal_to(open);
    const std::string close = ")" + in_.substr(at_ + 2, open - at_ - 2) + "\"";
    const std::size_t end = in_.find(close, open);
    pass_literal_to(end == std::string::npos ? end : end + close.size());
  }

  const std::string& in_;
  std::string out_;
  Literals literals_;
  std::size_t at_ = 0;
};

}  // namespace

std::vector<SourceFile> read_sources(const std::filesystem::path& src) {
  std::vector<SourceFile> files;
  for (const auto& entry : std::filesystem::recursive_directory_iterator(src)) {
    static const std::regex kCpp(R"(\.(h|hh|hpp|hxx|inl|c|cc|cpp|cxx)$)");
    const std::string path = entry.path().lexically_relative(src).generic_string();
    if (!entry.is_regular_file() || !std::regex_search(path, kCpp)) continue;
    std::ostringstream text;
    text << std::ifstream(entry.path(), std::ios::binary).rdbuf();
    files.push_back({path, text.str()});
  }
  std::sort(files.begin(), files.end(),
            [](const SourceFile& a, const SourceFile& b) { return a.path < b.path; });
  return files;
}

std::string room_of(const std::string& path) {
  const std::size_t slash = path.find('/');
  return slash == std::string::npos ? std::string() : path.substr(0, slash);
}

std::string without_comments(const std::string& text) {
  return Blanker(text, Literals::kKeep).run();
}

std::string code_only(const std::string& text) {
  return Blanker(text, Literals::kBlank).run();
}

std::vector<std::string> lines_of(const std::string& text) {
  std::vector<std::string> lines;
  std::istringstream stream(text);
  for (std::string line; std::getline(stream, line);) lines.push_back(line);
  return lines;
}

std::vector<Include> includes_of(const std::string& text) {
  static const std::regex kInclude(R"re(^\s*#\s*include\s*([<"])([^">]+)[">])re");
  std::vector<Include> includes;
  int number = 0;
  for (const std::string& line : lines_of(without_comments(text))) {
    ++number;
    std::smatch match;
    if (std::regex_search(line, match, kInclude)) {
      includes.push_back({number, match[1] == "\"", match[2]});
    }
  }
  return includes;
}

}  // namespace stillfield::architecture
