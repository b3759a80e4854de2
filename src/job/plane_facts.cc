#include "job/plane_facts.h"

namespace stillfield {
namespace {

NoiseFacts describe_noise(const NoiseModel& noise, const NoiseRequest& request) {
  NoiseFacts facts;
  facts.kind = name_of(noise.kind);
  if (noise.kind == NoiseKind::kPhoton) {
    facts.gain = noise.gain;
    facts.variance = noise.variance;
    facts.offset = noise.offset;
  } else {
    facts.sd = noise.sd;
  }
  facts.middle_grey = noise.mid_grey;
  facts.middle_sd = noise.sd_at(noise.mid_grey);
  facts.middle_sd_lower90 = noise.estimated ? noise.lower90 : facts.middle_sd;
  facts.middle_sd_upper90 = noise.estimated ? noise.upper90 : facts.middle_sd;
  facts.origin = !request.camera.empty() ? "camera" : noise.estimated ? "estimated" : "given";
  facts.impulse_share = noise.impulse_share;
  return facts;
}

}  // namespace

void describe_plane(const PreparedPlane& plane, const NoiseRequest& request,
                    PlaneRestoration& out) {
  out.facts.noise = describe_noise(plane.noise, request);
  out.facts.observed = plane.observed;
  out.facts.missing = plane.missing;
  out.facts.saturated = plane.cut_off;
  if (!plane.noise.warning.empty()) out.notes.push_back(plane.noise.warning);
  const NoiseCorrelation& noise = plane.correlation;
  out.facts.noise.neighbour_correlation = noise.at(1, 0);
  out.facts.noise.correlation_p_value = noise.p_value;
  if (!noise.correlated) return;
  if (!out.correlation_modelled) {
    out.sentences.push_back(noise.sentence);
    return;
  }
  out.notes.push_back("noise is correlated between neighbours, which is modelled");
  // The level is estimated from high frequencies, where correlated noise is weak.
  if (plane.noise.estimated) {
    out.sentences.push_back(
        "noise is correlated between neighbours, so its level is estimated too low and intervals "
        "are too narrow: give --noise");
  }
}

}  // namespace stillfield
