#include "architecture/rooms.h"

#include <algorithm>
#include <set>

namespace stillfield::architecture {
namespace {

struct ThirdParty {
  std::string prefix;  // of the header's path
  std::vector<std::string> rooms;
};

const std::vector<ThirdParty>& third_parties() {
  static const std::vector<ThirdParty> list = {
      {"tbb/", {"parallel"}},
      {"oneapi/tbb", {"parallel"}},
      {"hwy/contrib/math/", {}},  // fuses multiply-add, so results depend on the CPU
      {"hwy/", {"simd"}},
      {"Eigen/", {"model", "sampler", "diagnose"}},
      {"opencv2/", {"measure", "image"}},
      {"tiff", {"image"}},
      {"jpeglib", {"image"}},
      {"jerror", {"image"}},
      {"openssl/", {"image"}},
      {"pugixml", {"image"}},
      {"nlohmann/", {"report"}},
      {"CLI/", {"cli"}},
  };
  return list;
}

// ISO C++20, [headers] tables 19, 20 and 21, written from memory of the standard.
const std::set<std::string>& standard_headers() {
  static const std::set<std::string> list = {"algorithm",
                                             "any",
                                             "array",
                                             "atomic",
                                             "barrier",
                                             "bit",
                                             "bitset",
                                             "charconv",
                                             "chrono",
                                             "codecvt",
                                             "compare",
                                             "complex",
                                             "concepts",
                                             "condition_variable",
                                             "coroutine",
                                             "deque",
                                             "exception",
                                             "execution",
                                             "filesystem",
                                             "format",
                                             "forward_list",
                                             "fstream",
                                             "functional",
                                             "future",
                                             "initializer_list",
                                             "iomanip",
                                             "ios",
                                             "iosfwd",
                                             "iostream",
                                             "istream",
                                             "iterator",
                                             "latch",
                                             "limits",
                                             "list",
                                             "locale",
                                             "map",
                                             "memory",
                                             "memory_resource",
                                             "mutex",
                                             "new",
                                             "numbers",
                                             "numeric",
                                             "optional",
                                             "ostream",
                                             "queue",
                                             "random",
                                             "ranges",
                                             "ratio",
                                             "regex",
                                             "scoped_allocator",
                                             "semaphore",
                                             "set",
                                             "shared_mutex",
                                             "source_location",
                                             "span",
                                             "sstream",
                                             "stack",
                                             "stdexcept",
                                             "stop_token",
                                             "streambuf",
                                             "string",
                                             "string_view",
                                             "syncstream",
                                             "system_error",
                                             "thread",
                                             "tuple",
                                             "type_traits",
                                             "typeindex",
                                             "typeinfo",
                                             "unordered_map",
                                             "unordered_set",
                                             "utility",
                                             "valarray",
                                             "variant",
                                             "vector",
                                             "version",
                                             "cassert",
                                             "cctype",
                                             "cerrno",
                                             "cfenv",
                                             "cfloat",
                                             "cinttypes",
                                             "climits",
                                             "clocale",
                                             "cmath",
                                             "csetjmp",
                                             "csignal",
                                             "cstdarg",
                                             "cstddef",
                                             "cstdint",
                                             "cstdio",
                                             "cstdlib",
                                             "cstring",
                                             "ctime",
                                             "cuchar",
                                             "cwchar",
                                             "cwctype"};
  return list;
}

// POSIX.1-2017 headers that a portable command-line program may need, and that of flock, which POSIX
// lacks and every system we build on has.
const std::set<std::string>& posix_headers() {
  static const std::set<std::string> list = {
      "dirent.h",      "errno.h",    "fcntl.h",        "pthread.h",  "signal.h",   "sys/ioctl.h",
      "sys/file.h",    "sys/mman.h", "sys/resource.h", "sys/stat.h", "sys/time.h", "sys/types.h",
      "sys/utsname.h", "sys/wait.h", "termios.h",      "time.h",     "unistd.h"};
  return list;
}

bool contains(const std::vector<std::string>& list, const std::string& item) {
  return std::find(list.begin(), list.end(), item) != list.end();
}

}  // namespace

const std::vector<std::string>& room_order() {
  static const std::vector<std::string> order = {
      "core",     "random",  "parallel", "simd",   "model", "sampler", "posterior",
      "diagnose", "measure", "image",    "report", "job",   "cli"};
  return order;
}

int room_place(const std::string& room) {
  const auto found = std::find(room_order().begin(), room_order().end(), room);
  return found == room_order().end() ? -1 : static_cast<int>(found - room_order().begin());
}

bool on_the_chains_path(const std::string& room) {
  return contains({"core", "random", "simd", "model", "sampler", "posterior"}, room);
}

std::string outside_header_objection(const std::string& room, const std::string& header) {
  if (standard_headers().count(header) != 0 || posix_headers().count(header) != 0) return {};
  for (const ThirdParty& party : third_parties()) {
    if (header.compare(0, party.prefix.size(), party.prefix) != 0) continue;
    if (contains(party.rooms, room)) return {};
    std::string rooms;
    for (const std::string& allowed : party.rooms) rooms += (rooms.empty() ? "" : ", ") + allowed;
    return "<" + header + "> belongs in " + (rooms.empty() ? "no room" : rooms);
  }
  return "<" + header + "> is neither a standard nor a POSIX header nor a library of the list";
}

}  // namespace stillfield::architecture
