// Labels of one field under uneven light: a first fit of the light before restore_one, and joint
// sampling after it.
//
// Steps    1  first fit (model/surface_start.h); the image divided by it is what restore_one works
//             on: class search, starts and coupling need an image whose classes are flat
//          2  the chains of restore_one go on with the image itself and a surface each
//             (sampler/shaded_chain.h), begun at stronger and weaker light than the first fit;
//             while settling the class field follows the labels (--coupling auto). If the light
//             has moved away from the first fit by then, step 1 and 2 are done again with it
//          3  warm-up and sampling as in restore_one, with the surface among the scalars that have
//             to converge
// Coupling what restore_one found on the evened image
#ifndef STILLFIELD_JOB_RESTORE_SHADED_H_
#define STILLFIELD_JOB_RESTORE_SHADED_H_

#include <memory>

#include "job/label_sampling.h"
#include "job/observer.h"
#include "job/settings.h"
#include "parallel/pool.h"

namespace stillfield {

// The light of one image, from the first fit to the posterior.
class UnevenLight {
 public:
  // A first fit, unless the settings ask for none. Both images must outlive this.
  UnevenLight(const ShadingSettings& settings, const GreyLevels& grey, View<const float> pixels,
              int classes);

  bool modelled() const { return facts_.modelled; }
  const ShadingFacts& facts() const { return facts_; }

  // The image divided by the light known so far; itself when none is modelled.
  const GreyLevels& even_grey() const { return modelled() ? even_grey_ : *grey_; }
  View<const float> even_pixels() const { return modelled() ? even_pixels_.view() : pixels_; }
  // The light known so far; empty when none is modelled.
  const Volume<float>& surface() const { return surface_; }

  // What restore_one gives, or with light to model the joint sample; the light then is its
  // posterior mean. Throws as restore_one.
  LabelSampling restore(const SegmentSettings& settings, std::uint64_t image_seed, const Pool& pool,
                        JobObserver& observer, LogPartitionMemo* memo = nullptr);

 private:
  void become(const std::vector<double>& coefficients);
  std::vector<double> settle(const SegmentSettings& settings, const Pool& pool,
                             JobObserver& observer, LabelSampling& run) const;

  const GreyLevels* grey_;
  View<const float> pixels_;
  ShadingFacts facts_;
  std::shared_ptr<Shading> shading_;
  std::vector<double> coefficients_;
  Volume<float> surface_, even_pixels_;
  GreyLevels even_grey_;
};

}  // namespace stillfield

#endif  // STILLFIELD_JOB_RESTORE_SHADED_H_
