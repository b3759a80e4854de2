#include "measure/from_trace.h"

#include <algorithm>
#include <cmath>
#include <utility>

namespace stillfield {

Measurement measurement_from_trace(std::string name, int label, std::string unit,
                                   const Draws& draws) {
  return measurement_from_summary(std::move(name), label, std::move(unit), summarise(draws));
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
  return m;
}

}  // namespace stillfield
