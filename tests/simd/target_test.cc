#include "simd/target.h"

#include <algorithm>
#include <catch2/catch.hpp>

#include "core/error.h"
#include "simd/forced_target.h"

using namespace stillfield;
using namespace stillfield::testing;

TEST_CASE("the best target is in use unless another is forced") {
  const std::vector<std::string> targets = cpu_targets();
  REQUIRE_FALSE(targets.empty());
  CHECK(active_cpu_target() == targets.front());
  for_each_target([](const std::string& name) { CHECK(active_cpu_target() == name); });
  CHECK(active_cpu_target() == targets.front());
}

TEST_CASE("every target is different machine code that really runs") {
  // compiled_cpu_target is dispatched like the kernels and reports what it was compiled for.
  std::vector<std::string> seen;
  for_each_target([&seen](const std::string& name) {
    CHECK(compiled_cpu_target() == name);
    seen.push_back(compiled_cpu_target());
  });
  std::sort(seen.begin(), seen.end());
  CHECK(std::adjacent_find(seen.begin(), seen.end()) == seen.end());
}

TEST_CASE("an unknown target is refused with the list of known ones") {
  const std::string before = active_cpu_target();
  try {
    force_cpu_target("nonsense");
    FAIL("no error");
  } catch (const Error& error) {
    const std::string text = error.what();
    CAPTURE(text);
    CHECK(error.kind() == ErrorKind::kUsage);
    CHECK(text.find("'nonsense'") != std::string::npos);
    for (const std::string& name : cpu_targets()) CHECK(text.find(name) != std::string::npos);
  }
  CHECK(active_cpu_target() == before);
}
