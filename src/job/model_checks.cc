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

}  // namespace

int draws_for_checks(int chains) {
  return (kMostCheckedDraws + chains - 1) / chains;
}

void describe_checks(const GreyLevels& grey, const LabelSampling& sampling,
                     const PredictiveChecks& predictive, ImageRecord& record) {
  const GaussianClasses classes = mean_classes(record.model);
  const auto add = [&record](const std::vector<ModelCheck>& checks) {
    record.checks.insert(record.checks.end(), checks.begin(), checks.end());
  };
  add(predictive.results());
  add(contrast_facts(classes));
  for (std::size_t k = 0; k < classes.mean.size(); ++k) {
    const int label = static_cast<int>(k) + 1;
    add(support_facts(label, sampling.counts->probability(static_cast<int>(k))));
  }
  add(saturation_facts(grey, sampling.counts->most_probable().view(), classes));
  add(share_facts(grey, record.probability.uncertain_share));
  record.assessment = assess(sampling.verdict, record.checks);
}

}  // namespace stillfield
