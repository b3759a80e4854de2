// A label field as plain numbers, and sums over all its states.
//
//   p(z) prop. to exp( sum_s log_weight[s][z_s] + beta sum_<s,t> w_st [z_s = z_t] )
//   w = 1 for neighbours side by side, 1 / sqrt 2 for diagonal ones; free boundaries.
//
// Written from the model's formula with libm; shares no code with the program.
#ifndef STILLFIELD_TESTS_EXACTNESS_GIBBS_FIELD_H_
#define STILLFIELD_TESTS_EXACTNESS_GIBBS_FIELD_H_

#include <cstddef>
#include <cstdint>
#include <vector>

namespace stillfield::exactness {

struct GibbsField {
  int width = 0, height = 0, classes = 2;
  bool diagonals = false;  // 8 neighbours
  double beta = 0.0;
  std::vector<double> log_weight;  // [pixel * classes + k], pixel = y * width + x

  int pixels() const { return width * height; }
  double weight_of(int pixel, int k) const {
    return log_weight[static_cast<std::size_t>(pixel * classes + k)];
  }
};

using Labels = std::vector<std::uint8_t>;  // [pixel]

// S(z) = sum over pairs of w_st [z_s = z_t].
double weighted_pairs(const GibbsField& field, const Labels& labels);

// ln of the unnormalised probability.
double log_potential(const GibbsField& field, const Labels& labels);

struct ExactSums {
  std::vector<double> marginal;  // P(z_s = k), laid out as log_weight
  double mean_pairs = 0.0;       // E[S]
  double log_z = 0.0;
};

// Calls visit(labels) for each of the classes^pixels states.
template <class Visit>
void for_each_state(int pixels, int classes, const Visit& visit) {
  Labels labels(static_cast<std::size_t>(pixels), 0);
  for (;;) {
    visit(labels);
    std::size_t at = 0;
    while (at < labels.size() && ++labels[at] == classes) labels[at++] = 0;
    if (at == labels.size()) return;
  }
}

ExactSums sum_all_states(const GibbsField& field);

}  // namespace stillfield::exactness

#endif  // STILLFIELD_TESTS_EXACTNESS_GIBBS_FIELD_H_
