// Each rule on invented snippets: what breaks it, and what looks alike and does not.
#include "architecture/check.h"

#include <catch2/catch.hpp>

#include "architecture/rooms.h"

using namespace stillfield::architecture;

namespace {

using Check = Violations (*)(const SourceFile&);

std::size_t count(Check check, const std::string& path, const std::string& text) {
  return check({path, text}).size();
}

}  // namespace

TEST_CASE("files lie in a room and end in .h or .cc") {
  CHECK(count(check_place, "core/error.h", "") == 0);
  CHECK(count(check_place, "simd/philox-inl.h", "") == 0);
  CHECK(count(check_place, "kitchen/sink.h", "") == 1);
  CHECK(count(check_place, "loose.cc", "") == 1);
  CHECK(count(check_place, "core/error.hpp", "") == 1);
}

TEST_CASE("a room includes itself and rooms above it") {
  for (std::size_t i = 0; i < room_order().size(); ++i) {
    for (std::size_t j = 0; j < room_order().size(); ++j) {
      const std::string text = "#include \"" + room_order()[j] + "/part.h\"\n";
      CAPTURE(room_order()[i], text);
      CHECK(count(check_includes, room_order()[i] + "/a.cc", text) == (j > i ? 1 : 0));
    }
  }
  CHECK(count(check_includes, "core/a.cc", "  #  include   \"cli/b.h\"\n") == 1);
  CHECK(count(check_includes, "core/a.cc", "// #include \"cli/b.h\"\n") == 0);
  CHECK(count(check_includes, "core/a.cc", "/*\n#include \"cli/b.h\"\n*/\n") == 0);
  CHECK(count(check_includes, "core/a.cc", "#include \"error.h\"\n") == 1);
  CHECK(count(check_includes, "core/a.cc", "#include \"../cli/b.h\"\n") == 1);
  CHECK(check_includes({"core/a.cc", "\n\n#include \"cli/b.h\"\n"}).at(0).line == 3);
}

TEST_CASE("outside headers stay in their rooms") {
  struct Row {
    const char* header;
    std::vector<std::string> rooms;
  };
  const std::vector<Row> rows = {
      {"tbb/parallel_for.h", {"parallel"}},
      {"oneapi/tbb/task_arena.h", {"parallel"}},
      {"hwy/highway.h", {"simd"}},
      {"hwy/contrib/math/math-inl.h", {}},
      {"Eigen/Dense", {"model", "sampler", "diagnose"}},
      {"opencv2/imgproc.hpp", {"measure", "image"}},
      {"tiffio.h", {"image"}},
      {"jpeglib.h", {"image"}},
      {"openssl/evp.h", {"image"}},
      {"pugixml.hpp", {"image"}},
      {"nlohmann/json.hpp", {"report"}},
      {"CLI/CLI.hpp", {"cli"}},
      {"boost/graph/adjacency_list.hpp", {}},
      {"immintrin.h", {}},
      {"math.h", {}},
  };
  for (const Row& row : rows) {
    for (const std::string& room : room_order()) {
      const bool allowed = std::count(row.rooms.begin(), row.rooms.end(), room) != 0;
      const std::string text = "#include <" + std::string(row.header) + ">\n";
      CAPTURE(room, text);
      CHECK(count(check_includes, room + "/a.cc", text) == (allowed ? 0 : 1));
    }
  }
  CHECK(count(check_includes, "core/a.cc", "#include <vector>\n#include <sys/stat.h>\n") == 0);
}

TEST_CASE("a file has at most 300 lines") {
  std::string text;
  for (int i = 0; i < 300; ++i) text += "int x;\n";
  CHECK(count(check_length, "core/a.cc", text) == 0);
  CHECK(count(check_length, "core/a.cc", text + "int y;") == 1);
}

TEST_CASE("a header starts with the include guard of its path") {
  const auto guarded = [](const std::string& name) {
    return "// Purpose.\n#ifndef " + name + "\n#define " + name + "\n#endif\n";
  };
  CHECK(count(check_guard, "core/row_sum.h", guarded("STILLFIELD_CORE_ROW_SUM_H_")) == 0);
  CHECK(count(check_guard, "core/row_sum.h", guarded("STILLFIELD_CORE_ROWSUM_H_")) == 1);
  CHECK(count(check_guard, "core/row_sum.h", guarded("STILLFIELD_CORE_ROW_SUM_H")) == 1);
  CHECK(count(check_guard, "core/row_sum.h", "#pragma once\n") == 1);
  CHECK(count(check_guard, "core/row_sum.h", "int x;\n" + guarded("STILLFIELD_CORE_ROW_SUM_H_")) ==
        1);
  CHECK(count(check_guard, "core/row_sum.h",
              "#ifndef STILLFIELD_CORE_ROW_SUM_H_\n#define STILLFIELD_OTHER_H_\n#endif\n") == 1);
  CHECK(count(check_guard, "core/row_sum.cc", "") == 0);
  const std::string toggle =
      "#if defined(STILLFIELD_SIMD_A_INL_H_) == defined(HWY_TARGET_TOGGLE)\n";
  CHECK(count(check_guard, "simd/a-inl.h", toggle) == 0);
  CHECK(count(check_guard, "simd/b-inl.h", toggle) == 1);
}

TEST_CASE("the chain's path uses no library function that differs between CPUs") {
  for (const std::string room : {"core", "random", "simd", "model", "sampler", "posterior"}) {
    CAPTURE(room);
    CHECK(count(check_numbers, room + "/a.cc", "double y = std::exp(x);\n") == 1);
    CHECK(count(check_numbers, room + "/a.cc", "double y = 2*log1p (x);\n") == 1);
    CHECK(count(check_numbers, room + "/a.cc", "float y = ::powf(x, 2);\n") == 1);
    CHECK(count(check_numbers, room + "/a.cc", "w = v.array().exp();\n") == 1);
  }
  CHECK(count(check_numbers, "diagnose/a.cc", "double y = std::exp(x);\n") == 0);
  for (const std::string fine :
       {"exact_exp(x);\n", "std::sqrt(x);\n", "// std::exp(x)\n", "f(\"std::log(x)\");\n",
        "double log_weight(int k);\n", "expand(x);\n", "prior.cos(x);\n"}) {
    CAPTURE(fine);
    CHECK(count(check_numbers, "model/a.cc", fine) == 0);
  }
}

TEST_CASE("no distribution of the standard library, in any room") {
  for (const std::string& room : room_order()) {
    CHECK(count(check_numbers, room + "/a.cc", "std::normal_distribution<float> n;\n") == 1);
  }
  CHECK(count(check_numbers, "report/a.cc", "int size_distribution_bins;\n") == 0);
}

TEST_CASE("kernels neither fuse nor approximate") {
  CHECK(count(check_numbers, "simd/a.cc", "auto y = hn::MulAdd(a, b, c);\n") == 1);
  CHECK(count(check_numbers, "simd/a.cc", "auto y = NegMulSub(a, b, c);\n") == 1);
  CHECK(count(check_numbers, "simd/a.cc", "auto y = hn::ApproximateReciprocalSqrt(a);\n") == 1);
  CHECK(count(check_numbers, "simd/a.cc", "auto y = hn::Add(hn::Mul(a, b), c);\n") == 0);
  CHECK(count(check_numbers, "simd/a.cc", "// no MulAdd(a, b, c) here\n") == 0);
}

TEST_CASE("only cli prints and ends the process") {
  for (const std::string loud :
       {"std::cout << x;\n", "std::cerr << x;\n", "std::clog << x;\n", "printf(\"x\");\n",
        "std::fprintf(stderr, \"x\");\n", "puts(\"x\");\n", "std::exit(1);\n", "exit(1);\n",
        "::_exit(1);\n", "std::abort();\n"}) {
    CAPTURE(loud);
    CHECK(count(check_manners, "job/a.cc", loud) == 1);
    CHECK(count(check_manners, "cli/a.cc", loud) == 0);
  }
  for (const std::string quiet :
       {"std::snprintf(b, 9, \"x\");\n", "loop.exit(1);\n", "pool->abort();\n", "on_exit(f);\n",
        "// std::cout\n", "auto s = \"std::exit(1)\";\n", "auto s = R\"x(printf(1))x\";\n"}) {
    CAPTURE(quiet);
    CHECK(count(check_manners, "job/a.cc", quiet) == 0);
  }
}

TEST_CASE("cv::Mat stays in image and measure") {
  for (const std::string& room : room_order()) {
    const std::size_t expected = room == "image" || room == "measure" ? 0 : 1;
    CHECK(count(check_manners, room + "/a.h", "void f(const cv::Mat& m);\n") == expected);
    CHECK(count(check_manners, room + "/a.h", "cv::Mat1b m;\n") == expected);
  }
}

TEST_CASE("quotes, escapes and digit separators do not hide code") {
  CHECK(count(check_manners, "job/a.cc", "auto s = \"a\\\"b\"; std::exit(1);\n") == 1);
  CHECK(count(check_manners, "job/a.cc", "char q = '\"'; std::exit(1);\n") == 1);
  CHECK(count(check_manners, "job/a.cc", "int n = 1'000; std::exit(1);\n") == 1);
  CHECK(count(check_manners, "job/a.cc", "auto s = R\"(\")\"; std::exit(1);\n") == 1);
  CHECK(count(check_manners, "job/a.cc", "/* \" */ std::exit(1);\n") == 1);
  CHECK(count(check_manners, "job/a.cc", "auto s = \"//\"; std::exit(1);\n") == 1);
}

TEST_CASE("a reading path is a chain of includes within the two rooms") {
  std::vector<SourceFile> files = {{"cli/main.cc", "#include \"cli/segment.h\"\n"},
                                   {"cli/segment.h", ""},
                                   {"cli/segment.cc", "#include \"job/folder.h\"\n"}};
  CHECK(reading_path_leads(files, "cli/main.cc", {"job/restore_one.h", "job/folder.h"}));
  CHECK_FALSE(reading_path_leads(files, "cli/main.cc", {"job/restore_one.h"}));
  files[2].text = "#include \"report/detour.h\"\n";
  files.push_back({"report/detour.h", "#include \"job/folder.h\"\n"});
  CHECK_FALSE(reading_path_leads(files, "cli/main.cc", {"job/folder.h"}));
}
