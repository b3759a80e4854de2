// Runs a piece of a test once for every CPU target of this build and machine.
#ifndef STILLFIELD_TESTS_SIMD_FORCED_TARGET_H_
#define STILLFIELD_TESTS_SIMD_FORCED_TARGET_H_

#include <string>

#include "simd/target.h"

namespace stillfield::testing {

// Forces a target for its own lifetime; REQUIRE may throw meanwhile.
class ForcedTarget {
 public:
  explicit ForcedTarget(const std::string& name) { force_cpu_target(name); }
  ~ForcedTarget() { force_cpu_target("auto"); }
  ForcedTarget(const ForcedTarget&) = delete;
  ForcedTarget& operator=(const ForcedTarget&) = delete;
};

template <class Body>
void for_each_target(const Body& body) {
  for (const std::string& name : cpu_targets()) {
    const ForcedTarget forced(name);
    body(name);
  }
}

}  // namespace stillfield::testing

#endif  // STILLFIELD_TESTS_SIMD_FORCED_TARGET_H_
