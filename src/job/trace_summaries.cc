#include "job/trace_summaries.h"

#include <string>

#include "diagnose/summary.h"

namespace stillfield {
namespace {

constexpr double kWarmRhat = 1.1;

std::string scalar_name(const Trace& trace) {
  return trace.label == 0 ? trace.name : trace.name + " of class " + std::to_string(trace.label);
}

}  // namespace

std::vector<NamedSummary> summarise_traces(const std::vector<Trace>& traces) {
  std::vector<NamedSummary> result;
  for (const Trace& t : traces) result.push_back({scalar_name(t), summarise(Draws(t.chains))});
  return result;
}

bool chains_agree(const std::vector<Trace>& traces) {
  for (const Trace& t : traces) {
    std::vector<std::vector<double>> half;
    for (const auto& chain : t.chains) {
      half.emplace_back(chain.begin() + static_cast<std::ptrdiff_t>(chain.size() / 2), chain.end());
    }
    const double rhat = summarise(Draws(half)).rhat;
    if (rhat > kWarmRhat) return false;  // NaN (all draws equal) is agreement
  }
  return true;
}

}  // namespace stillfield
