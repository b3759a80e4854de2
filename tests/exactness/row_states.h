// Exact sums over a label field row by row: the transfer matrix between states of whole rows
// (Kramers & Wannier 1941), forwards and backwards.
//
// Cost     classes^(2 width) x height
#ifndef STILLFIELD_TESTS_EXACTNESS_ROW_STATES_H_
#define STILLFIELD_TESTS_EXACTNESS_ROW_STATES_H_

#include <functional>

#include "exactness/gibbs_field.h"

namespace stillfield::exactness {

ExactSums sum_row_states(const GibbsField& field);

// One exact draw of the labels: rows from last to first, each given the row below. `uniform` gives
// independent uniforms on (0, 1).
Labels draw_row_states(const GibbsField& field, const std::function<double()>& uniform);

}  // namespace stillfield::exactness

#endif  // STILLFIELD_TESTS_EXACTNESS_ROW_STATES_H_
