#include "job/restore_plane.h"

#include <algorithm>
#include <cmath>
#include <limits>
#include <optional>

#include "job/plane_facts.h"
#include "job/prepared_plane.h"
#include "job/recheck.h"
#include "job/restore_intensity.h"
#include "model/variogram.h"
#include "random/counters.h"
#include "sampler/noise_redraw.h"
#include "sampler/patch_field.h"

namespace stillfield {
namespace {

constexpr double kNormal90 = 1.6448536269514722;  // 95 % quantile of the standard normal

// The posterior of the transformed intensities.
struct FieldPosterior {
  IntensityMoments moments;
  std::vector<Volume<float>> draws;
};

PriorChoice fitting_prior(const Volume<float>& value, const DenoiseSettings& settings,
                          std::vector<std::string>& notes) {
  const int side = std::min(value.width(), value.height());
  if (settings.prior != PriorChoice::kPatches || side >= least_patch_side()) return settings.prior;
  notes.push_back("the image is too small for patches (a side of " + std::to_string(side) +
                  " pixels, at least " + std::to_string(least_patch_side()) +
                  " are needed): restored with --prior edges");
  return PriorChoice::kEdges;
}

// What the sampler redraws between sweeps: pixels without a value, and impulses.
RedrawProblem redraw_problem(const PreparedPlane& plane, const std::optional<double>& saturation) {
  const Extent e = plane.start.extent();
  RedrawProblem problem;
  problem.observed = Volume<float>(e);
  problem.state = Volume<std::uint8_t>(e);
  for (int y = 0; y < e.height; ++y) {
    for (int x = 0; x < e.width; ++x) {
      problem.observed.at(x, y) = plane.transformed.at(x, y);
      const PixelState state = plane.saturated.at(x, y) != 0 ? PixelState::kSaturated
                               : plane.usable.at(x, y) == 0  ? PixelState::kMissing
                                                             : PixelState::kPlain;
      problem.state.at(x, y) = static_cast<std::uint8_t>(state);
    }
  }
  problem.white_sd = plane.transform->sd();
  problem.noise = given_gaussian_noise(problem.white_sd);
  if (saturation) problem.saturation = plane.transform->forward(*saturation);
  problem.impulses = plane.impulses.share > 0;
  if (problem.impulses) {
    problem.density = ImpulseDensity(plane.transformed.view(), plane.usable.view(), plane.impulses);
    problem.impulse_share = plane.impulses.share;
  }
  return problem;
}

// The correlation of the noise to model, or white noise and a note that says why.
NoiseCorrelationModel correlation_to_model(const PreparedPlane& plane, bool gaps,
                                           PlaneRestoration& out) {
  if (!plane.correlation.correlated) {
    out.notes.push_back("no correlation of the noise was found: it is taken as white");
    return {};
  }
  if (gaps) {
    out.notes.push_back(
        "the correlation of the noise is not modelled where pixels are missing, saturated or "
        "impulses: it is taken as white");
    return {};
  }
  out.correlation_modelled = true;
  return {plane.correlation.reach, plane.correlation.rho};
}

PatchSettings patch_settings(const DenoiseSettings& settings) {
  PatchSettings patches;
  patches.patch = settings.patch;
  patches.quick = settings.quick;
  patches.samples = std::max(settings.samples, settings.recheck ? 1 : 0);
  return patches;
}

FieldPosterior sample_patches(const PreparedPlane& plane, const DenoiseSettings& settings,
                              std::uint64_t seed, const PatchMixture* mixture, const Pool& pool,
                              JobObserver& observer, PlaneRestoration& out) {
  const bool gaps = plane.impulses.share > 0 || plane.missing + plane.cut_off > 0;
  const double sd = plane.transform->sd();
  NoiseRedraw redraw(redraw_problem(plane, settings.saturation), chain_key(seed, 0));
  PatchSettings patches = patch_settings(settings);
  if (settings.correlated_noise) {
    patches.noise_correlation = correlation_to_model(plane, gaps, out);
  }
  int steps_made = 0;
  const auto progress = [&](int step, int steps) {
    steps_made = steps;
    observer.stepped(step, steps);
    return observer.stop_requested();
  };
  PatchResult result = restore_patches(plane.start, sd, patches, chain_key(seed, 0), pool,
                                       gaps ? &redraw : nullptr, mixture, progress);
  if (settings.recheck && out.correlation_modelled) {
    out.notes.push_back("not rechecked: a recheck adds white noise, and this one is correlated");
    result.draws.resize(static_cast<std::size_t>(settings.samples));
  } else if (settings.recheck) {
    patches.samples = 0;
    const auto again = [&](const Volume<float>& value, std::uint32_t run) {
      return restore_patches(value, sd, patches, chain_key(seed, run), pool, nullptr, mixture,
                             progress)
          .moments;
    };
    out.facts.sd_factor = recheck_factor(result.moments.mean, result.draws.front(), sd,
                                         chain_key(seed, 0), pool, again);
    result.draws.resize(static_cast<std::size_t>(settings.samples));
  }
  if (gaps) {
    add_gap_variance(result.moments.mean.view(), plane.clean.view(),
                     result.moments.variance.view());
  }
  if (plane.impulses.share > 0) out.impulse = redraw.impulse_probability();
  for (const PatchShare& s : result.shares) {
    out.facts.blend.push_back({s.side, s.components, s.groups ? "groups" : "tilings", s.weight});
  }
  out.field = {name_of(PriorChoice::kPatches), 0, steps_made, {}};
  return {std::move(result.moments), std::move(result.draws)};
}

FieldPosterior sample_differences(const PreparedPlane& plane, PriorChoice prior,
                                  const DenoiseSettings& settings, std::uint64_t seed,
                                  const Pool& pool, JobObserver& observer, PlaneRestoration& out) {
  const Extent e = plane.start.extent();
  const auto sd = static_cast<float>(plane.transform->sd());
  Volume<float> variance(e);
  for (int y = 0; y < e.height; ++y) {
    for (int x = 0; x < e.width; ++x) {
      variance.at(x, y) =
          plane.clean.at(x, y) != 0 ? sd * sd : std::numeric_limits<float>::infinity();
    }
  }
  IntensitySettings field;
  field.prior = prior == PriorChoice::kSmooth ? IntensityPrior::kSmooth : IntensityPrior::kEdges;
  field.connectivity = settings.connectivity;
  field.chains = settings.chains;
  field.max_sweeps = settings.max_sweeps;
  field.quick = settings.quick;
  field.samples = settings.samples;
  field.seed = seed;
  IntensityFieldResult result = sample_intensity_field(plane.start, variance, field, pool, nullptr,
                                                       [&](int sweeps, int most) {
                                                         observer.stepped(sweeps, most);
                                                         return observer.stop_requested();
                                                       });
  out.field = {name_of(prior), result.warming_sweeps, result.sampling_sweeps, {}};
  out.facts.scalars = result.scalars;
  out.converged = result.converged;
  for (const MissedTarget& miss : result.verdict.misses) out.sentences.push_back(miss.sentence);
  return {{std::move(result.mean), std::move(result.variance)}, std::move(result.draws)};
}

// Intensities, deviations and bounds from the posterior of the transformed values.
void map_back(const FieldPosterior& posterior, const VarianceTransform& transform,
              PlaneRestoration& out) {
  const double widening = out.facts.sd_factor * out.facts.sd_factor;
  const Extent e = posterior.moments.mean.extent();
  for (Volume<float>* map : {&out.restored, &out.sd, &out.lower90, &out.upper90}) {
    *map = Volume<float>(e);
  }
  double sum = 0;
  for (int y = 0; y < e.height; ++y) {
    for (int x = 0; x < e.width; ++x) {
      const double mean = posterior.moments.mean.at(x, y);
      const double variance = posterior.moments.variance.at(x, y) * widening;
      const double half = kNormal90 * std::sqrt(variance);
      const double lower = transform.point_inverse(mean - half);
      const double upper = transform.point_inverse(mean + half);
      const double restored = std::clamp(transform.mean_inverse(mean, variance), lower, upper);
      out.restored.at(x, y) = static_cast<float>(restored);
      out.lower90.at(x, y) = std::min(static_cast<float>(lower), out.restored.at(x, y));
      out.upper90.at(x, y) = std::max(static_cast<float>(upper), out.restored.at(x, y));
      out.sd.at(x, y) = static_cast<float>((upper - lower) / (2 * kNormal90));
      sum += out.sd.at(x, y);
    }
  }
  out.facts.mean_sd = sum / static_cast<double>(e.sites());
  for (const Volume<float>& draw : posterior.draws) {
    Volume<float> image(e);
    for (int y = 0; y < e.height; ++y) {
      for (int x = 0; x < e.width; ++x) {
        image.at(x, y) = static_cast<float>(transform.point_inverse(draw.at(x, y)));
      }
    }
    out.draws.push_back(std::move(image));
  }
}

}  // namespace

PlaneRestoration restore_plane(const Volume<float>& value, const Volume<std::uint8_t>& allowed,
                               const DenoiseSettings& settings, std::uint64_t seed,
                               const PatchMixture* mixture, const Pool& pool,
                               JobObserver& observer) {
  PlaneRestoration out;
  const PreparedPlane plane = prepare_plane(value, allowed, settings, pool);
  const PriorChoice prior = fitting_prior(value, settings, out.notes);
  if (settings.correlated_noise && prior != PriorChoice::kPatches) {
    out.notes.push_back(
        "the correlation of the noise is modelled by --prior patches only: it is taken as white");
  }
  FieldPosterior posterior;
  if (prior == PriorChoice::kPatches) {
    posterior = sample_patches(plane, settings, seed, mixture, pool, observer, out);
  } else {
    posterior = sample_differences(plane, prior, settings, seed, pool, observer, out);
  }
  map_back(posterior, *plane.transform, out);
  describe_plane(plane, settings.noise, out);
  return out;
}

}  // namespace stillfield
