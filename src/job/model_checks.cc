#include "job/model_checks.h"

#include "diagnose/class_facts.h"

namespace stillfield {
namespace {

GaussianClasses mean_classes(const ModelFacts& model) {
  GaussianClasses classes;
  for (const ClassFacts& facts : model.classes) {
    classes.mean.push_back(facts.mean.mean);
    classes.sd.push_back(facts.sd.mean);
  }
  return classes;
}

std::int64_t pixels_in(const Volume<std::uint8_t>& usable, const Extent& extent) {
  if (usable.empty()) return extent.sites();
  std::int64_t pixels = 0;
  for (int y = 0; y < usable.height(); ++y) {
    for (int x = 0; x < usable.width(); ++x) pixels += usable.at(x, y) != 0 ? 1 : 0;
  }
  return pixels;
}

// A model that knows the blur expects mixed pixels, and the check does not know that model.
void leave_out_border_mixing(std::vector<ModelCheck>& checks) {
  for (ModelCheck& check : checks) {
    if (check.name != "border_mixing") continue;
    check.p_value = kUnknown;
    check.failed = check.grave = false;
    check.sentence.clear();
  }
}

}  // namespace

void describe_checks(const GreyLevels& grey, const Volume<std::uint8_t>& usable,
                     const LabelSampling& sampling, const PredictiveChecks& predictive,
                     ImageRecord& record) {
  const GaussianClasses classes = mean_classes(record.model);
  const auto add = [&record](const std::vector<ModelCheck>& checks) {
    record.checks.insert(record.checks.end(), checks.begin(), checks.end());
  };
  add(predictive.results());
  if (record.blur.modelled) leave_out_border_mixing(record.checks);
  add(contrast_facts(classes));
  for (std::size_t k = 0; k < classes.mean.size(); ++k) {
    const int label = static_cast<int>(k) + 1;
    add(support_facts(grey, label, sampling.counts->probability(static_cast<int>(k))));
  }
  add(saturation_facts(grey, sampling.counts->most_probable().view(), classes));
  add(share_facts(grey, pixels_in(usable, grey.level.extent()),
                  record.probability.uncertain_share));
  record.assessment = assess(sampling.verdict, record.checks);
}

}  // namespace stillfield
