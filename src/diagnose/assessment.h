// The verdict on one result in one word, with its reasons.
//
//   sound      it converged and no check failed
//   look       something calls for a look at the image before the figures are used
//   doubtful   a check failed by so much, or the chains disagree so much (a target of convergence
//              missed by more than kGraveShortfall times), that the figures should not be used
// Reasons    one sentence each, grave ones first, then those of convergence, then of the checks
#ifndef STILLFIELD_DIAGNOSE_ASSESSMENT_H_
#define STILLFIELD_DIAGNOSE_ASSESSMENT_H_

#include <span>
#include <string>
#include <vector>

#include "diagnose/model_check.h"
#include "diagnose/verdict.h"

namespace stillfield {

inline constexpr char kSound[] = "sound";
inline constexpr char kLook[] = "look";
inline constexpr char kDoubtful[] = "doubtful";

// R-hat 1.10 for the default target of 1.01; common practice, no source.
inline constexpr double kGraveShortfall = 10;

struct Assessment {
  std::string word = kSound;
  bool check_failed = false;
  std::vector<std::string> reasons;
};

Assessment assess(const Verdict& convergence, std::span<const ModelCheck> checks);

}  // namespace stillfield

#endif  // STILLFIELD_DIAGNOSE_ASSESSMENT_H_
