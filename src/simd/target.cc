#include "simd/target.h"

#include <array>
#include <cstdint>

#include "core/error.h"

#undef HWY_TARGET_INCLUDE
#define HWY_TARGET_INCLUDE "simd/target.cc"
#include <hwy/foreach_target.h>
// foreach_target.h must come first.
#include <hwy/highway.h>
#include <hwy/targets.h>

HWY_BEFORE_NAMESPACE();
namespace stillfield {
namespace HWY_NAMESPACE {

std::int64_t this_target() {
  return HWY_TARGET;
}

}  // namespace HWY_NAMESPACE
}  // namespace stillfield
HWY_AFTER_NAMESPACE();

#if HWY_ONCE
namespace stillfield {

HWY_EXPORT(this_target);

namespace {

struct Named {
  std::int64_t target;
  const char* name;
};

constexpr std::array<Named, 6> kTargets{{{HWY_AVX3, "avx512"},
                                         {HWY_AVX2, "avx2"},
                                         {HWY_SSE4, "sse4"},
                                         {HWY_SSSE3, "ssse3"},
                                         {HWY_EMU128, "emulated"},
                                         {HWY_SCALAR, "scalar"}}};

// Asked once, before anything is forced.
std::int64_t runnable() {
  static const std::int64_t mask = hwy::SupportedTargets() & HWY_TARGETS;
  return mask;
}

std::int64_t& forced() {
  static std::int64_t target = 0;
  return target;
}

std::string name_of(std::int64_t target) {
  for (const Named& t : kTargets) {
    if (t.target == target) return t.name;
  }
  return "unknown";
}

void use(std::int64_t target) {
  forced() = target;
  hwy::SetSupportedTargetsForTest(target);  // 0: no restriction
  hwy::GetChosenTarget().Update(hwy::SupportedTargets());
}

}  // namespace

std::vector<std::string> cpu_targets() {
  const std::int64_t mask = runnable();
  std::vector<std::string> names;
  for (const Named& t : kTargets) {
    if (mask & t.target) names.emplace_back(t.name);
  }
  return names;
}

std::string active_cpu_target() {
  return forced() != 0 ? name_of(forced()) : cpu_targets().front();
}

std::string compiled_cpu_target() {
  return name_of(HWY_DYNAMIC_DISPATCH(this_target)());
}

void force_cpu_target(std::string_view name) {
  const std::int64_t mask = runnable();
  if (name == "auto") {
    use(0);
    return;
  }
  std::string possible;
  for (const Named& t : kTargets) {
    if (!(mask & t.target)) continue;
    if (name == t.name) {
      use(t.target);
      return;
    }
    possible += std::string(possible.empty() ? "" : ", ") + t.name;
  }
  throw Error(ErrorKind::kUsage, "CPU target '" + std::string(name) +
                                     "' cannot run here; choose auto or one of: " + possible);
}

}  // namespace stillfield
#endif
