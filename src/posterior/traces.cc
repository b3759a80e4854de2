#include "posterior/traces.h"

namespace stillfield {

Traces::Traces(int classes, int chains, bool with_coupling, bool complete)
    : with_coupling_(with_coupling), complete_(complete) {
  const auto add = [&](const char* name, int label) {
    traces_.push_back(
        {name, label, std::vector<std::vector<double>>(static_cast<std::size_t>(chains))});
  };
  for (const char* name : {"area_fraction", "class_mean", "class_sd"}) {
    for (int k = 1; k <= classes; ++k) add(name, k);
  }
  if (complete) add("equal_neighbours", 0);
  if (with_coupling) add("coupling", 0);
}

void Traces::trace_light(const SurfaceBasis& basis) {
  light_ = &basis;
  const std::size_t chains = traces_.front().chains.size();
  for (const char* name : {"light_centre", "light_top_left", "light_top_right", "light_bottom_left",
                           "light_bottom_right"}) {
    traces_.push_back({name, 0, std::vector<std::vector<double>>(chains)});
  }
}

void Traces::record(int chain_number, const LabelChain& chain, const Neighbourhood& neighbourhood) {
  const auto c = static_cast<std::size_t>(chain_number);
  std::size_t at = 0;
  const auto put = [&](double value) { traces_[at++].chains[c].push_back(value); };
  const auto counted = [this](const ClassSums& sums) {
    return static_cast<double>(complete_ ? sums.sites : sums.observed);
  };
  double sites = 0.0;
  for (const ClassSums& sums : chain.totals.classes) sites += counted(sums);
  for (const ClassSums& sums : chain.totals.classes) put(counted(sums) / sites);
  for (const double mean : chain.model.classes.mean) put(mean);
  for (const double sd : chain.model.classes.sd) put(sd);
  if (complete_) put(chain.totals.weighted_pairs(neighbourhood) / sites);
  if (with_coupling_) put(chain.model.prior.beta);
  if (light_) {
    const int right = light_->extent.width - 1, bottom = light_->extent.height - 1;
    put(SurfaceRow(*light_, chain.light, bottom / 2).at(right / 2));
    for (const int y : {0, bottom}) {
      const SurfaceRow row(*light_, chain.light, y);
      put(row.at(0));
      put(row.at(right));
    }
  }
}

void Traces::clear() {
  for (Trace& trace : traces_) {
    for (auto& chain : trace.chains) chain.clear();
  }
}

}  // namespace stillfield
