#include "diagnose/draws.h"

#include <algorithm>
#include <cmath>
#include <utility>

#include "core/error.h"

namespace stillfield {

Draws::Draws(std::size_t draws, std::size_t chains)
    : draws_(draws), chains_(chains), values_(draws * chains) {}

Draws::Draws(std::vector<double> values, std::size_t chains)
    : draws_(chains == 0 ? 0 : values.size() / chains),
      chains_(chains),
      values_(std::move(values)) {
  if (draws_ * chains_ != values_.size()) {
    throw Error(ErrorKind::kUsage,
                std::to_string(values_.size()) + " draws cannot be shared by " +
                    std::to_string(chains_) +
                    " chains of equal length; record every chain equally often.");
  }
}

Draws::Draws(const std::vector<std::vector<double>>& chains)
    : draws_(chains.empty() ? 0 : chains.front().size()), chains_(chains.size()) {
  values_.reserve(draws_ * chains_);
  for (const std::vector<double>& one : chains) {
    if (one.size() != draws_) {
      throw Error(ErrorKind::kUsage, "The chains of a trace hold " + std::to_string(draws_) +
                                         " and " + std::to_string(one.size()) +
                                         " draws; record every chain equally often.");
    }
    values_.insert(values_.end(), one.begin(), one.end());
  }
}

bool can_be_diagnosed(const Draws& draws) {
  return draws.chains() > 0 && draws.draws() >= kMinDraws &&
         std::all_of(draws.values().begin(), draws.values().end(),
                     [](double x) { return std::isfinite(x); });
}

bool is_constant(const Draws& draws) {
  const std::span<const double> all = draws.values();
  return std::all_of(all.begin(), all.end(), [&](double x) { return x == all.front(); });
}

Draws split_chains(const Draws& draws) {
  const std::size_t half = draws.draws() / 2;
  Draws split(half, 2 * draws.chains());
  for (std::size_t c = 0; c < draws.chains(); ++c) {
    const std::span<const double> whole = draws.chain(c);
    std::ranges::copy(whole.first(half), split.chain(2 * c).begin());
    std::ranges::copy(whole.last(half), split.chain(2 * c + 1).begin());
  }
  return split;
}

}  // namespace stillfield
