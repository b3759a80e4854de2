// How many classes an image has.
//
// Maths    score(K) = sum over held-out pixels of their log predictive density given the others
//          (sampler/held_out.h; Geisser & Eddy 1979), with K classes at one fixed coupling. It needs
//          no count of parameters: a class too many predicts nothing better, two classes taken as
//          one predict worse.
// Choice   the fewest classes whose score lies within kErrors standard errors of the best one, the
//          error being that of the sum of the differences, pixel by pixel (the rule of one standard
//          error: Breiman, Friedman, Olshen & Stone 1984, here with kErrors).
// Method   for each K several starts run for a short time and are judged on one part of the pixels;
//          the best goes on and is judged on kJudgedParts others, all with the same parts for every
//          K. Starts: mixtures of the image averaged over small squares (model/smoothed_start.h),
//          and the result for K - 1 with one class split in two.
#ifndef STILLFIELD_SAMPLER_CLASS_SEARCH_H_
#define STILLFIELD_SAMPLER_CLASS_SEARCH_H_

#include <cstdint>
#include <vector>

#include "model/grey_levels.h"
#include "model/neighbourhood.h"
#include "parallel/pool.h"

namespace stillfield {

struct TriedClasses {
  int classes = 1;
  double score = 0.0;       // nats
  double below_best = 0.0;  // best score - score
  double error = 0.0;       // standard error of below_best
};

struct ClassSearch {
  int choice = 1;                   // 1: one class explains the image
  std::vector<TriedClasses> tried;  // 1, 2, ...
};

// Tries 1..most classes, no more than grey levels occur.
ClassSearch search_classes(const GreyLevels& grey, const Neighbourhood& neighbourhood,
                           bool shared_variance, int most, std::uint64_t seed, const Pool& pool);

}  // namespace stillfield

#endif  // STILLFIELD_SAMPLER_CLASS_SEARCH_H_
