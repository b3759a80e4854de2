// Which instruction set the kernels use: listed, named, forced, recorded.
//
// Results do not depend on it (docs/reproducibility.md); speed does.
#ifndef STILLFIELD_SIMD_TARGET_H_
#define STILLFIELD_SIMD_TARGET_H_

#include <string>
#include <string_view>
#include <vector>

namespace stillfield {

// Names of the targets this build contains and this CPU can run, best first:
// some of "avx512", "avx2", "sse4", "ssse3", "scalar" (or "emulated" with clang).
std::vector<std::string> cpu_targets();

// Name of the target in use.
std::string active_cpu_target();

// Name of the target the dispatched code was compiled for: active_cpu_target() seen from inside a
// kernel, which proves that forcing took effect.
std::string compiled_cpu_target();

// Uses the named target, or the best one for "auto". Not safe while kernels run.
// Throws Error(kUsage) naming the possible targets when `name` is not one of them.
void force_cpu_target(std::string_view name);

}  // namespace stillfield

#endif  // STILLFIELD_SIMD_TARGET_H_
