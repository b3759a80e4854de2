// The keys of a restoration in the record (report/record.h), for both directions of an archive
// (report/json_archive.h).
#ifndef STILLFIELD_REPORT_RESTORATION_ARCHIVE_H_
#define STILLFIELD_REPORT_RESTORATION_ARCHIVE_H_

#include "report/restoration_facts.h"

namespace stillfield {

template <class Archive>
void describe(Archive& archive, NoiseFacts& noise) {
  archive("kind", noise.kind);
  archive("sd", noise.sd);
  archive("gain", noise.gain);
  archive("variance", noise.variance);
  archive("offset", noise.offset);
  archive("middle_grey", noise.middle_grey);
  archive("middle_sd", noise.middle_sd);
  archive("middle_sd_lower90", noise.middle_sd_lower90);
  archive("middle_sd_upper90", noise.middle_sd_upper90);
  archive("origin", noise.origin);
  archive("impulse_share", noise.impulse_share);
  archive("neighbour_correlation", noise.neighbour_correlation);
  archive("correlation_p_value", noise.correlation_p_value);
}

template <class Archive>
void describe(Archive& archive, BlendFacts& blend) {
  archive("patch", blend.patch);
  archive("components", blend.components);
  archive("stage", blend.stage);
  archive("weight", blend.weight);
}

template <class Archive>
void describe(Archive& archive, ChannelFacts& channel) {
  archive("channel", channel.channel);
  archive("noise", channel.noise);
  archive("observed_pixels", channel.observed);
  archive("missing_pixels", channel.missing);
  archive("saturated_pixels", channel.saturated);
  archive("mean_sd", channel.mean_sd);
  archive("sd_factor", channel.sd_factor);
  archive("blend", channel.blend);
  archive("scalars", channel.scalars);
}

template <class Archive>
void describe(Archive& archive, RestorationFacts& restoration) {
  archive("prior", restoration.prior);
  archive("warming_sweeps", restoration.warming_sweeps);
  archive("sampling_sweeps", restoration.sampling_sweeps);
  archive("channels", restoration.channels);
}

}  // namespace stillfield

#endif  // STILLFIELD_REPORT_RESTORATION_ARCHIVE_H_
