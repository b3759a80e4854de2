// A record with a value in every field.
#ifndef STILLFIELD_TESTS_REPORT_RECORD_SAMPLE_H_
#define STILLFIELD_TESTS_REPORT_RECORD_SAMPLE_H_

#include <limits>
#include <string>

#include "report/record.h"

namespace stillfield::test {

inline Measurement area_fraction(int label, double estimate, double sd) {
  return {.name = "area_fraction",
          .label = label,
          .unit = "1",
          .estimate = estimate,
          .sd = sd,
          .lower90 = estimate - 1.645 * sd,
          .upper90 = estimate + 1.645 * sd,
          .lower95 = estimate - 1.96 * sd,
          .upper95 = estimate + 1.96 * sd,
          .mcse = sd / 20,
          .rhat = 1.003,
          .ess = 412.5,
          .plain_estimate = estimate,
          .defined_share = 1};
}

inline ImageRecord record_sample(const std::string& path = "heat/a, \"b\".tif") {
  ImageRecord record;
  record.command = kSegment;
  record.version = "0.1.0";
  record.libraries = {{"libtiff", std::string("4.5.0")}};
  record.settings_digest = std::string(64, 'a');
  record.input = {path,     std::string(64, 'b'), 1234, 2, 3, 40, 30, "16-bit unsigned integer", 1,
                  kUnknown, {"a note", "another"}, "", "z 1 of 3, channel 1 of 1, time 1 of 1"};
  record.grey = {300, 250, 17.5, 0.25, 1199, 1};
  record.settings = {{"classes", std::uint64_t{2}},
                     {"variance", std::string("own")},
                     {"seed", ~std::uint64_t{0}},
                     {"max_rhat", 1.01},
                     {"min_ess", 400.0},
                     {"flag", true}};
  record.image_seed = "0xfedcba9876543210";
  TraceSummary summary{0.25, 0.01, 0.23, 0.27, 0.22, 0.28, 0.0005, 1.002, 500, 430};
  record.class_choice = {2, 1, 3, -4.5, {{1, -900.5, 2.5, 1.25}, {2, -898, 0, 0}}};
  record.model = {
      1.25, kUnknown, kUnknown, kUnknown, {{1, 0, summary, summary}, {2, -0.3, summary, summary}}};
  record.blur = {0.8, 0.7, 0.9, true, true};
  record.shading = {6, true, 0.25, 0.875, 1.125, 0.005, 0.02};
  record.coupling_tried = {{1.0, -100.5}, {1.25, -99.75}};
  record.schedule = {240, 96, 144, false, true};
  record.scalars = {{"area_fraction of class 1", summary}, {"equal_neighbours", {}}};
  record.scalars[1].summary.rhat = std::numeric_limits<double>::infinity();
  record.probability = {0.004, 0.001, 0.05};
  record.verdict = {false, {"It did not converge."}};
  record.assessment = {kLook, true, {"noise is correlated, very"}};
  record.checks = {
      {"noise_correlation", 0, 0.25, -0.01, 0.03, 0.0078, true, true, "noise is correlated, very"},
      {"class_contrast", 1, 2.5, kUnknown, 0.75, kUnknown, false, false, {}}};
  record.measurements = {area_fraction(1, 0.25, 0.01), area_fraction(2, 0.75, 0.01)};
  record.outputs = {{".labels.tif", 999, std::string(64, 'c')}};
  record.run = {"avx2", 2, 0.1, 2.5, 0.2};
  return record;
}

inline ImageRecord restoration_sample() {
  ImageRecord record = record_sample("yeast/a.tif");
  record.command = kDenoise;
  record.restoration = {"patches", 0, 27, {}};
  ChannelFacts channel;
  channel.channel = "grey";
  channel.noise.kind = "photon";
  channel.noise.gain = 0.5;
  channel.noise.middle_sd = 7.5;
  channel.noise.origin = "estimated";
  channel.observed = 1199;
  channel.missing = 1;
  channel.mean_sd = 2.25;
  channel.blend = {{6, 20, "tilings", 0.25}, {6, 20, "groups", 0.75}};
  channel.scalars = {{"prior_strength", {}}};
  record.restoration.channels = {channel, channel};
  return record;
}

}  // namespace stillfield::test

#endif  // STILLFIELD_TESTS_REPORT_RECORD_SAMPLE_H_
