#include "diagnose/assessment.h"

namespace stillfield {

Assessment assess(const Verdict& convergence, std::span<const ModelCheck> checks) {
  std::vector<std::string> grave, light;
  if (!convergence.converged && !convergence.misses.empty()) {
    const MissedTarget& worst = convergence.misses.front();
    (worst.shortfall > kGraveShortfall ? grave : light)
        .push_back("sampling did not converge: " + worst.sentence);
  }
  Assessment out;
  for (const ModelCheck& check : checks) {
    if (!check.failed) continue;
    out.check_failed = true;
    (check.grave ? grave : light).push_back(check.sentence);
  }
  if (!light.empty()) out.word = kLook;
  if (!grave.empty()) out.word = kDoubtful;
  out.reasons = grave;
  out.reasons.insert(out.reasons.end(), light.begin(), light.end());
  return out;
}

}  // namespace stillfield
