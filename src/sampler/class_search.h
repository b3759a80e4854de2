// How many classes an image has.
//
// Maths    score(K) = sum over held-out pixels of log sum_k P(z_s = k | neighbours) f_k(y_s)
//                     - max( (d / 2) log n, kLeastGain n K )
//          with the labels of the neighbours drawn without y_s (sampler/held_out.h), n held-out
//          pixels, d parameters: K means, K (or 1) standard deviations, K - 1 class fields. It is
//          the pseudo-likelihood information criterion (Stanford & Raftery 2002) with the
//          pseudo-likelihood of data that the labels have not seen: labels that were fitted to a
//          pixel explain its noise, and the more classes the better. kLeastGain: no image follows
//          the model to the last nat, and in a large one every trifle (blurred borders, a skewed
//          class) is significant; what a class adds must be worth having in each pixel.
// Choice   the fewest classes whose score lies within kSearchErrors standard errors of the best
//          one, the error being that of the sum of the differences, pixel by pixel (the rule of
//          one standard error: Breiman, Friedman, Olshen & Stone 1984, here with two)
// Method   for each K several starts run for a short time and are judged on one part of the pixels;
//          the best goes on and is judged on the seven other parts, the same for every K. Starts:
//          mixtures of the image averaged over small squares (model/smoothed_start.h), and the
//          result for K - 1 with one class split in two. The coupling is fixed.
//          The search ends when two numbers in a row have not scored better.
// Bytes    the same for any number of threads and any CPU target
#ifndef STILLFIELD_SAMPLER_CLASS_SEARCH_H_
#define STILLFIELD_SAMPLER_CLASS_SEARCH_H_

#include <cstdint>
#include <vector>

#include "model/grey_levels.h"
#include "model/neighbourhood.h"
#include "parallel/pool.h"

namespace stillfield {

inline constexpr double kSearchErrors = 2.0;
inline constexpr double kLeastGain = 0.003;  // nats a pixel and class; rule of thumb, no source

struct TriedClasses {
  int classes = 1;
  double score = 0.0;       // nats
  double below_best = 0.0;  // the best score less this one
  double error = 0.0;       // standard error of below_best
};

struct ClassSearch {
  int choice = 1;                   // 1: one class explains the image
  std::vector<TriedClasses> tried;  // 1, 2, ...
};

// Tries 1..most classes, no more than grey levels occur. The image should be small and have few
// levels (model/search_image.h). At least one pixel must be observed.
ClassSearch search_classes(const GreyLevels& grey, const Neighbourhood& neighbourhood,
                           bool shared_variance, int most, std::uint64_t seed, const Pool& pool);

// The choice alone: [K - 1][pixel], log predictive densities of the same pixels for K = 1, 2, ...
ClassSearch choose_by_scores(const std::vector<std::vector<double>>& log_density,
                             bool shared_variance);

}  // namespace stillfield

#endif  // STILLFIELD_SAMPLER_CLASS_SEARCH_H_
