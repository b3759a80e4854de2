#include "sampler/blurred_chain.h"

#include <iterator>

#include "core/elementary.h"
#include "sampler/blurred_classes.h"
#include "sampler/blurred_sweep.h"
#include "sampler/path_sampling.h"

namespace stillfield {
namespace {

// Standard deviations of the proposals, in pixels: the posterior's width is of the order of 0.01
// to 0.1.
constexpr double kProposals[] = {0.2, 0.05, 0.0125};

// Adds one to the visits of every pixel's class.
void count_visits(const Colouring& c, const BlurredField& field, LabelChain& chain) {
  for (int colour = 0; colour < c.colours(); ++colour) {
    for (int row = 0; row < c.rows(colour); ++row) {
      const std::uint8_t* label = field.labels.row(c.y_of(colour, row)) + c.first_x(colour, 0, row);
      std::uint8_t* visits = chain.visits.data() + c.plane_row(colour, 0, row);
      for (int j = 0; j < c.sites(colour, 0, row); ++j) {
        const std::size_t k = label[2 * j];
        if (k > 0) ++visits[(k - 1) * c.plane_elements() + c.byte_of(j)];
      }
    }
  }
  ++chain.visits_pending;
}

}  // namespace

BlurredField open_blurred_chain(const LabelPosterior& problem, const BlurKernel& kernel,
                                const LabelChain& chain) {
  const Colouring& colouring = *problem.field.colouring;
  BlurredField field = open_blurred_field(*problem.field.grey, kernel);
  Volume<std::uint8_t> labels(colouring.extent());
  gather_labels(colouring, chain.labels, labels.view());
  set_labels(labels.view(), field);
  refresh_blurred_field(level_classes(*field.grey, chain.model.classes), field);
  return field;
}

void advance_blurred_chain(const LabelPosterior& problem, int sweeps, const Pool& pool,
                           BlurredField& field, LabelChain& chain) {
  const Colouring& colouring = *problem.field.colouring;
  for (int s = 0; s < sweeps; ++s) {
    sweep_blurred(colouring.neighbourhood(), chain.model, chain.key, chain.sweeps_done, field);
    ++chain.sweeps_done;
    if (!chain.visits.empty()) count_visits(colouring, field, chain);
  }
  scatter_labels(colouring, View<const std::uint8_t>(field.labels.view()), chain.labels);
  total_labels(problem.field, pool, chain);
  RandomStream random(chain.key, Purpose::kParameters, chain.sweeps_done);
  draw_blurred_classes(problem.prior, random, field, chain.model.classes);
  if (problem.log_partition) {
    chain.model.prior.beta = draw_coupling(
        *problem.log_partition, chain.totals.weighted_pairs(colouring.neighbourhood()), random);
  }
  refresh_blurred_field(level_classes(*field.grey, chain.model.classes), field);
}

void draw_blur(const LabelPosterior& problem, BlurredField& field, const LabelChain& chain) {
  RandomStream random(chain.key, Purpose::kBlur, chain.sweeps_done);
  const double scale = kProposals[chain.sweeps_done % std::size(kProposals)];
  const double proposed = field.kernel.sd + scale * random.normal();
  if (proposed < kSmallestBlur || proposed > kLargestBlur) return;
  const BlurKernel kernel = make_blur_kernel(proposed);
  const LevelClasses classes = level_classes(*problem.field.grey, chain.model.classes);
  const double gain = log_likelihood_under(kernel, classes, field) - log_likelihood(classes, field);
  if (exact_log(random.uniform()) >= gain) return;
  set_blur(kernel, {}, field);
  refresh_blurred_field(classes, field);
}

}  // namespace stillfield
