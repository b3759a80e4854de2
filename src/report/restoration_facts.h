// What the record of a restored image says about its noise and its field.
//
// Units    grey values of the file
// NaN      what does not apply or is not known
#ifndef STILLFIELD_REPORT_RESTORATION_FACTS_H_
#define STILLFIELD_REPORT_RESTORATION_FACTS_H_

#include <cstdint>
#include <limits>
#include <string>
#include <vector>

#include "diagnose/verdict.h"

namespace stillfield {

inline constexpr double kUnknown = std::numeric_limits<double>::quiet_NaN();

struct NoiseFacts {
  std::string kind;        // "gaussian", "photon", "rician"
  double sd = kUnknown;    // gaussian, rician
  double gain = kUnknown;  // photon: variance of a pixel = gain (x - offset) + variance
  double variance = kUnknown;
  double offset = kUnknown;
  double middle_grey = kUnknown;
  double middle_sd = kUnknown;  // at middle_grey, with its 90 % interval if estimated
  double middle_sd_lower90 = kUnknown;
  double middle_sd_upper90 = kUnknown;
  std::string origin;  // "given", "camera", "estimated"
  double impulse_share = 0;
  double neighbour_correlation = kUnknown;  // of the noise, between horizontal neighbours
  double correlation_p_value = kUnknown;
};

// One of the restorations that a channel's result blends (sampler/patch_blend.h).
struct BlendFacts {
  int patch = 0;       // side
  int components = 0;  // of the mixture
  std::string stage;   // "tilings", "groups"
  double weight = 1;
};

struct ChannelFacts {
  std::string channel;  // "grey", "red", "green", "blue"
  NoiseFacts noise;
  std::int64_t observed = 0;
  std::int64_t missing = 0;  // not a number, masked
  std::int64_t saturated = 0;
  double mean_sd = kUnknown;          // mean over pixels of the posterior standard deviation
  double sd_factor = 1;               // by which a recheck widened or narrowed the intervals
  std::vector<BlendFacts> blend;      // of patches; empty for the other priors
  std::vector<NamedSummary> scalars;  // of sampled parameters
};

struct RestorationFacts {
  std::string prior;  // "patches", "edges", "smooth"
  int warming_sweeps = 0;  // sweeps of each chain; for patches tilings and passes
  int sampling_sweeps = 0;
  std::vector<ChannelFacts> channels;
};

}  // namespace stillfield

#endif  // STILLFIELD_REPORT_RESTORATION_FACTS_H_
