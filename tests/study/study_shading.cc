// Wrong labels and recovered light of `segment --shading` on synthetic scenes under uneven light.
//
// usage: study_shading IMAGES [--side PIXELS] [--span SPAN] [--coefficients N] [--sigma SIGMA ...]
// sigma: noise over the distance of two classes. Prints Markdown table rows: the same scenes under
// even light taken plainly, under uneven light with the light modelled, and taken plainly.
// Results: docs/trust.md.
#include <algorithm>
#include <cstdio>
#include <cstdlib>
#include <string>
#include <vector>

#include "job/restore_shaded.h"
#include "study/lit_scenes.h"

using namespace stillfield;

namespace {

struct Result {
  double wrong = 0, light = 0, first_light = 0;
  bool converged = false;
  int sweeps = 0;
};

Result analyse(const Volume<float>& image, const Volume<std::uint8_t>& truth,
               const Volume<double>& light, SegmentSettings settings, std::uint64_t seed,
               const Pool& pool) {
  JobObserver observer;
  const GreyLevels grey = make_grey_levels(image.view());
  UnevenLight uneven(settings.shading, grey, image.view(), settings.classes);
  Result result;
  if (uneven.modelled()) result.first_light = study::light_error(uneven.surface(), light);
  const LabelSampling run = uneven.restore(settings, seed, pool, observer);
  result.wrong = study::misclassified(run.counts->most_probable(), truth);
  if (uneven.modelled()) result.light = study::light_error(uneven.surface(), light);
  result.converged = run.verdict.converged;
  result.sweeps = run.warming_sweeps + run.sampling_sweeps;
  return result;
}

}  // namespace

int main(int argc, char** argv) {
  int images = 3, side = 128, coefficients = 6;
  double span = 0.3;
  std::vector<double> sigmas;
  for (int i = 1; i < argc; ++i) {
    const std::string word = argv[i];
    if (word == "--side") {
      side = std::atoi(argv[++i]);
    } else if (word == "--span") {
      span = std::atof(argv[++i]);
    } else if (word == "--coefficients") {
      coefficients = std::atoi(argv[++i]);
    } else if (word == "--sigma") {
      sigmas.push_back(std::atof(argv[++i]));
    } else {
      images = std::atoi(argv[i]);
    }
  }
  if (sigmas.empty()) sigmas = {0.4, 0.7, 1.0};
  const Pool pool(2);
  std::printf("| scene | sigma | images | wrong, even light | wrong, modelled | ratio of means | "
              "worst ratio | wrong, ignored | light rms, mean | worst | first fit | converged |\n"
              "|---|---|---|---|---|---|---|---|---|---|---|---|\n");
  for (const study::LitScene scene :
       {study::LitScene::kDisks, study::LitScene::kBlobs, study::LitScene::kThree}) {
    for (const double sigma : sigmas) {
      double even = 0, modelled = 0, ignored = 0, light = 0, first = 0, worst = 0, worst_ratio = 0;
      int converged = 0;
      for (int i = 0; i < images; ++i) {
        const auto seed = static_cast<std::uint64_t>(4000 + i);
        const auto kind = static_cast<study::Light>(i % 3);
        const auto truth = study::draw_lit_scene(scene, side, i % 2 == 1, seed);
        const auto uneven = study::draw_light(kind, side, span, seed);
        const auto flat = study::draw_light(kind, side, 0, seed);
        SegmentSettings settings;
        settings.classes = scene == study::LitScene::kThree ? 3 : 2;
        const auto taken_flat = study::photograph_lit(truth, flat, 50 * sigma, seed);
        const auto taken = study::photograph_lit(truth, uneven, 50 * sigma, seed);
        const Result a = analyse(taken_flat, truth, flat, settings, seed, pool);
        const Result c = analyse(taken, truth, uneven, settings, seed, pool);
        settings.shading = {ShadingMode::kGiven, coefficients};
        const Result b = analyse(taken, truth, uneven, settings, seed, pool);
        if (std::getenv("VERBOSE")) {
          std::printf("  %s %.1f %d %s: %.4f %.4f %.4f light %.4f first %.4f sweeps %d conv %d\n",
                      study::kLitSceneNames[static_cast<int>(scene)], sigma, i,
                      study::kLightNames[static_cast<int>(kind)], a.wrong, b.wrong, c.wrong,
                      b.light, b.first_light, b.sweeps, b.converged * 10 + a.converged);
          std::fflush(stdout);
        }
        even += a.wrong / images;
        modelled += b.wrong / images;
        ignored += c.wrong / images;
        light += b.light / images;
        first += b.first_light / images;
        worst = std::max(worst, b.light);
        worst_ratio = std::max(worst_ratio, b.wrong / std::max(a.wrong, 1e-9));
        converged += b.converged ? 1 : 0;
      }
      std::printf("| %s | %.1f | %d | %.4f | %.4f | %.2f | %.2f | %.4f | %.4f | %.4f | %.4f | %d |\n",
                  study::kLitSceneNames[static_cast<int>(scene)], sigma, images, even, modelled,
                  modelled / even, worst_ratio, ignored, light, worst, first, converged);
      std::fflush(stdout);
    }
  }
}
