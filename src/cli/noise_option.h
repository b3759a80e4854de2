// The value of --noise: a kind of noise, with its level or without.
//
//   auto                           the data decide, gaussian or photon
//   gaussian   gaussian:SD         rician   rician:SD          SD > 0 in grey values
//   photon     photon:GAIN,VARIANCE[,OFFSET]                   GAIN > 0, VARIANCE >= 0
#ifndef STILLFIELD_CLI_NOISE_OPTION_H_
#define STILLFIELD_CLI_NOISE_OPTION_H_

#include <optional>
#include <string>

#include "job/denoise_settings.h"

namespace stillfield {

std::optional<NoiseRequest> parse_noise(const std::string& text);

// Empty for a good value, else what is wrong with it.
std::string check_noise(const std::string& text);

// auto, off or a share above 0 and below 0.5.
std::string check_impulses(const std::string& text);

}  // namespace stillfield

#endif  // STILLFIELD_CLI_NOISE_OPTION_H_
