#include "exactness/joint_draw.h"

#include <cmath>
#include <utility>

#include "exactness/row_states.h"
#include "exactness/strip.h"
#include "random/stream.h"

namespace stillfield::exactness {
namespace {

GaussianClasses draw_classes(RandomStream& random) {
  GaussianClasses classes{{0.0, 0.0}, {0.0, 0.0}, false};
  for (std::size_t k = 0; k < 2; ++k) {
    const double variance =
        0.5 * kJointPrior.nu * kJointPrior.variance / random.gamma(0.5 * kJointPrior.nu);
    classes.sd[k] = std::sqrt(variance);
    classes.mean[k] = kJointPrior.mean + std::sqrt(variance / kJointPrior.kappa) * random.normal();
  }
  if (classes.mean[0] > classes.mean[1]) {
    std::swap(classes.mean[0], classes.mean[1]);
    std::swap(classes.sd[0], classes.sd[1]);
  }
  return classes;
}

}  // namespace

LogPartition exact_log_partition(const Neighbourhood& neighbourhood) {
  constexpr int kPoints = 400;
  LogPartition result;
  for (int i = 0; i <= kPoints; ++i) {
    const double beta = max_coupling(neighbourhood, 2) * i / kPoints;
    const StripSums sums = sum_strip(kJointSide, kJointSide, 2, beta);
    result.beta.push_back(beta);
    result.mean_pairs.push_back(sums.mean_pairs);
    result.log_z.push_back(sums.log_z - kJointSide * kJointSide * std::log(2.0));
  }
  return result;
}

JointDraw draw_jointly(const LogPartition& log_partition, std::uint64_t seed) {
  RandomStream random(chain_key(seed, 9), Purpose::kSimulation);
  FieldSpec spec =
      empty_spec(kJointSide, kJointSide, 2, log_partition.max_beta() * random.uniform(), seed);
  spec.model.classes = draw_classes(random);
  const Labels truth = draw_row_states(plain_field(spec), [&random] { return random.uniform(); });
  Volume<float> image({kJointSide, kJointSide});
  for (int s = 0; s < kJointSide * kJointSide; ++s) {
    const std::size_t k = truth[static_cast<std::size_t>(s)];
    image.at(s % kJointSide, s / kJointSide) =
        static_cast<float>(spec.model.classes.mean[k] + spec.model.classes.sd[k] * random.normal());
  }
  const GreyLevels grey = make_grey_levels(image.view());
  spec.levels = grey.levels;
  spec.origin = grey.origin;
  spec.step = grey.step;
  for (int s = 0; s < kJointSide * kJointSide; ++s) {
    spec.level[static_cast<std::size_t>(s)] = grey.level.at(s % kJointSide, s / kJointSide);
  }
  return {spec, truth};
}

void sweep_block(TestField& field) {
  field.prepare();
  field.sweep(2);
}

void draw_parameters(const LogPartition& log_partition, TestField& field) {
  LabelChain& chain = field.chain;
  const double pairs = field.pairs_now();
  RandomStream parameters(chain.key, Purpose::kParameters, chain.sweeps_done);
  draw_gaussian_classes(field.grey, chain.totals.classes, kJointPrior, parameters,
                        chain.model.classes);
  chain.model.prior.beta = draw_coupling(log_partition, pairs, parameters);
}

}  // namespace stillfield::exactness
