// The most probable labels of a 2-label field, exactly, by a minimum cut (Greig, Porteous & Seheult
// 1989), with Boost.Graph's boykov_kolmogorov_max_flow.
#ifndef STILLFIELD_TESTS_EXACTNESS_MAX_FLOW_H_
#define STILLFIELD_TESTS_EXACTNESS_MAX_FLOW_H_

#include "exactness/gibbs_field.h"

namespace stillfield::exactness {

// Capacities are rounded to multiples of 2^-30.
Labels most_probable_labels(const GibbsField& field);

}  // namespace stillfield::exactness

#endif  // STILLFIELD_TESTS_EXACTNESS_MAX_FLOW_H_
