// ln p(y | z) of labels seen through blur, from the formula of model/blur.h in plain loops with
// libm; shares no code with the program.
#ifndef STILLFIELD_TESTS_EXACTNESS_BLURRED_LIKELIHOOD_H_
#define STILLFIELD_TESTS_EXACTNESS_BLURRED_LIKELIHOOD_H_

#include "exactness/test_field.h"

namespace stillfield::exactness {

double plain_log_likelihood(const FieldSpec& spec, double blur, const Volume<float>& weight,
                            const Labels& z);

}  // namespace stillfield::exactness

#endif  // STILLFIELD_TESTS_EXACTNESS_BLURRED_LIKELIHOOD_H_
