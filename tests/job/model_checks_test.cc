// The small version of the study of warnings (tests/study/study_checks.cc): from image to verdict.
#include "job/model_checks.h"

#include <algorithm>
#include <catch2/catch.hpp>

#include "job/field_record.h"
#include "job/label_draws.h"
#include "job/restore_one.h"
#include "study/checked_images.h"

using namespace stillfield;

namespace {

ImageRecord checked(const study::CheckedImage& image, int threads) {
  const GreyLevels grey = make_grey_levels(study::draw(image).view());
  SegmentSettings settings;
  settings.classes = image.asked_classes;
  settings.target = {1.05, 100, 0.02};
  settings.schedule.max_sweeps = 900;
  const Pool pool(threads);
  JobObserver observer;
  LabelSampling sampling = restore_one(grey, settings, image.seed, pool, observer);
  ImageRecord record;
  record.command = kSegment;
  record.probability.uncertain_share = 0;
  describe_sampling(sampling, settings, record);
  constexpr int kDraws = 32;
  PredictiveChecks checks(grey, settings.chains, kDraws, image.seed);
  for_label_draws(settings, kDraws, pool, observer, sampling, [&](const LabelDraw& d) {
    checks.show(d.chain, d.draw, d.labels, d.model.classes);
  });
  describe_checks(grey, {}, sampling, checks, record);
  return record;
}

bool failed(const ImageRecord& record, const std::string& name) {
  return std::any_of(record.checks.begin(), record.checks.end(),
                     [&](const ModelCheck& c) { return c.name == name && c.failed; });
}

study::CheckedImage small(const char* fault, double size, int asked, int truth) {
  study::CheckedImage image;
  image.fault = fault;
  image.size_of_fault = size;
  image.side = 96;
  image.asked_classes = asked;
  image.true_classes = truth;
  image.sigma = 0.35;
  image.eight_bits = true;
  image.seed = 3;
  return image;
}

}  // namespace

TEST_CASE("a segmented image that breaks the model is called so, with the fitting check") {
  const auto correlated = checked(small("correlated noise", 0.7, 2, 2), 2);
  CHECK(failed(correlated, "noise_correlation"));
  CHECK(correlated.assessment.word == kDoubtful);
  CHECK(failed(checked(small("shading", 0.3, 2, 2), 2), "slow_trend"));
  CHECK(failed(checked(small("class too few", 1, 2, 3), 2), "noise_distribution"));
  CHECK(checked(small("class too many", 1, 3, 2), 2).assessment.check_failed);
  CHECK(failed(checked(small("saturated", 0.5, 2, 2), 2), "saturation"));
}

TEST_CASE("segmented images that follow the model pass") {
  // Seeds fixed; in the study about one image in fifty fails.
  for (const bool disks : {true, false}) {
    for (const int classes : {2, 3}) {
      study::CheckedImage image = small("none", 0, classes, classes);
      image.disks = disks;
      const ImageRecord record = checked(image, 2);
      CHECK_FALSE(record.assessment.check_failed);
    }
  }
}

TEST_CASE("checks do not depend on the number of threads") {
  const study::CheckedImage image = small("none", 0, 2, 2);
  const ImageRecord one = checked(image, 1), three = checked(image, 3);
  REQUIRE(one.checks.size() == three.checks.size());
  for (std::size_t i = 0; i < one.checks.size(); ++i) {
    CHECK((one.checks[i].value == three.checks[i].value ||
           one.checks[i].value != one.checks[i].value));
    CHECK((one.checks[i].p_value == three.checks[i].p_value ||
           one.checks[i].p_value != one.checks[i].p_value));
  }
}
