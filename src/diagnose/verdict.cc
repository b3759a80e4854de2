#include "diagnose/verdict.h"

#include <algorithm>
#include <array>
#include <charconv>
#include <cmath>
#include <limits>
#include <utility>

#include "core/error.h"
#include "diagnose/number_text.h"

namespace stillfield {
namespace {

constexpr double kInfinity = std::numeric_limits<double>::infinity();
constexpr const char* kProbability = "mean label probability";

std::string shortest(double value) {
  std::array<char, 32> text;
  const auto end = std::to_chars(text.data(), text.data() + text.size(), value);
  return {text.data(), end.ptr};
}

bool holds_still(const TraceSummary& s) {
  return s.sd == 0.0;
}

void judge_rhat(const NamedSummary& scalar, const ConvergenceTarget& target,
                std::vector<MissedTarget>& misses) {
  const double rhat = scalar.summary.rhat;
  if (rhat <= target.max_rhat) return;
  // Rounded up, so that a value just above the target never reads as equal to it.
  const double shown = std::ceil(rhat * 1e4) / 1e4;
  misses.push_back({scalar.name,
                    scalar.name + ": the chains disagree, R-hat is " + fixed_text(shown, 4) +
                        " and should be at most " + shortest(target.max_rhat) + ".",
                    (rhat - 1) / (target.max_rhat - 1)});
}

void judge_ess(const NamedSummary& scalar, const char* kind, const char* what, double ess,
               const ConvergenceTarget& target, std::vector<MissedTarget>& misses) {
  if (ess >= target.min_ess) return;
  misses.push_back({scalar.name,
                    scalar.name + ": too few effective draws for its " + what + ", " + kind +
                        " ESS is " + fixed_text(std::floor(ess), 0) + " and should be at least " +
                        shortest(target.min_ess) + ".",
                    target.min_ess / ess});
}

void judge_scalar(const NamedSummary& scalar, const ConvergenceTarget& target,
                  std::vector<MissedTarget>& misses) {
  const TraceSummary& s = scalar.summary;
  if (holds_still(s)) return;
  if (std::isinf(s.rhat)) {
    misses.push_back({scalar.name,
                      scalar.name + ": the chains stand still, but not at the same value.",
                      kInfinity});
  } else if (std::isnan(s.mean)) {
    misses.push_back({scalar.name,
                      scalar.name + ": cannot be judged, it has fewer than 4 draws a chain or "
                                    "draws that are not finite numbers.",
                      kInfinity});
  } else if (std::isnan(s.rhat) || std::isnan(s.ess_bulk) || std::isnan(s.ess_tail)) {
    misses.push_back(
        {scalar.name, scalar.name + ": cannot be judged, its chains hardly ever move.", kInfinity});
  } else {
    judge_rhat(scalar, target, misses);
    judge_ess(scalar, "bulk", "mean", s.ess_bulk, target, misses);
    judge_ess(scalar, "tail", "interval", s.ess_tail, target, misses);
  }
}

void judge_probability(double mcse, const ConvergenceTarget& target,
                       std::vector<MissedTarget>& misses) {
  if (mcse <= target.max_probability_mcse) return;
  if (std::isnan(mcse)) {
    misses.push_back({kProbability,
                      std::string(kProbability) + ": its Monte Carlo error is not known yet.",
                      kInfinity});
    return;
  }
  const double shown = std::ceil(mcse * 1e4) / 1e4;
  misses.push_back({kProbability,
                    std::string(kProbability) + ": its Monte Carlo error is " +
                        fixed_text(shown, 4) + " and should be at most " +
                        shortest(target.max_probability_mcse) + ".",
                    mcse / target.max_probability_mcse});
}

void check(const ConvergenceTarget& target) {
  if (target.max_rhat > 1 && target.min_ess > 0 && target.max_probability_mcse > 0) return;
  throw Error(ErrorKind::kUsage,
              "A convergence target cannot be met; set the largest R-hat above 1, and the smallest "
              "effective sample size and the largest Monte Carlo error above 0.");
}

}  // namespace

Verdict judge_convergence(std::span<const NamedSummary> scalars,
                          std::optional<double> probability_mcse, const ConvergenceTarget& target) {
  check(target);
  Verdict verdict;
  for (const NamedSummary& scalar : scalars) judge_scalar(scalar, target, verdict.misses);
  if (probability_mcse) judge_probability(*probability_mcse, target, verdict.misses);
  std::stable_sort(
      verdict.misses.begin(), verdict.misses.end(),
      [](const MissedTarget& a, const MissedTarget& b) { return a.shortfall > b.shortfall; });
  verdict.converged = verdict.misses.empty();
  return verdict;
}

}  // namespace stillfield
