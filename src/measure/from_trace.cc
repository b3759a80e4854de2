#include "measure/from_trace.h"

#include <algorithm>
#include <cmath>
#include <utility>
#include <vector>

namespace stillfield {
namespace {

// The finite draws of each chain, and all of them together.
struct DefinedDraws {
  std::vector<std::vector<double>> chains;
  std::vector<double> pooled;
};

DefinedDraws defined_draws(const Draws& draws) {
  DefinedDraws defined;
  for (std::size_t c = 0; c < draws.chains(); ++c) {
    std::vector<double>& chain = defined.chains.emplace_back();
    for (const double value : draws.chain(c)) {
      if (std::isfinite(value)) chain.push_back(value);
    }
    defined.pooled.insert(defined.pooled.end(), chain.begin(), chain.end());
  }
  return defined;
}

TraceSummary summarise_defined(DefinedDraws defined) {
  TraceSummary s = summarise(Draws(std::move(defined.pooled), 1));
  std::size_t shortest = defined.chains.front().size();
  for (const auto& chain : defined.chains) shortest = std::min(shortest, chain.size());
  for (auto& chain : defined.chains) chain.resize(shortest);
  const TraceSummary by_chain = summarise(Draws(defined.chains));
  s.mcse = by_chain.mcse;
  s.rhat = by_chain.rhat;
  s.ess_bulk = by_chain.ess_bulk;
  s.ess_tail = by_chain.ess_tail;
  return s;
}

}  // namespace

Measurement measurement_from_trace(std::string name, int label, std::string unit,
                                   const Draws& draws) {
  DefinedDraws defined = defined_draws(draws);
  TraceSummary summary;
  double share = std::numeric_limits<double>::quiet_NaN();
  if (defined.pooled.size() == draws.size()) {
    summary = summarise(draws);
    if (draws.size() > 0) share = 1;
  } else {
    share = static_cast<double>(defined.pooled.size()) / static_cast<double>(draws.size());
    if (share >= kLeastDefinedShare) summary = summarise_defined(std::move(defined));
  }
  Measurement m = measurement_from_summary(std::move(name), label, std::move(unit), summary);
  m.defined_share = share;
  return m;
}

Measurement measurement_from_summary(std::string name, int label, std::string unit,
                                     const TraceSummary& summary) {
  Measurement m;
  m.name = std::move(name);
  m.label = label;
  m.unit = std::move(unit);
  m.estimate = summary.mean;
  m.sd = summary.sd;
  m.lower90 = summary.lower90;
  m.upper90 = summary.upper90;
  m.lower95 = summary.lower95;
  m.upper95 = summary.upper95;
  m.mcse = summary.mcse;
  m.rhat = summary.rhat;
  if (!std::isnan(summary.ess_bulk) && !std::isnan(summary.ess_tail))
    m.ess = std::min(summary.ess_bulk, summary.ess_tail);
  m.plain_estimate = summary.mean;
  if (!std::isnan(summary.mean)) m.defined_share = 1;
  return m;
}

}  // namespace stillfield
