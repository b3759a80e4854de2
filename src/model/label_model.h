// The parameters of a hidden label field.
//
//   p(z | alpha, beta) prop. to exp( sum_s alpha_{z_s} + beta sum_<s,t> w_st [z_s = z_t] )
//   y_s | z_s = k  ~  N(mean_k, sd_k^2)
//   (Geman & Geman 1984; Besag 1974, 1986)
//
// Classes are numbered by rising mean; grey values are in the file's units.
#ifndef STILLFIELD_MODEL_LABEL_MODEL_H_
#define STILLFIELD_MODEL_LABEL_MODEL_H_

#include <vector>

namespace stillfield {

struct LabelPrior {
  std::vector<double> alpha;  // class field, one a class; alpha[0] = 0
  double beta = 0.0;          // coupling, >= 0
};

struct GaussianClasses {
  std::vector<double> mean;
  std::vector<double> sd;
  bool shared_variance = false;
};

struct LabelModel {
  LabelPrior prior;
  GaussianClasses classes;

  int size() const { return static_cast<int>(classes.mean.size()); }
};

}  // namespace stillfield

#endif  // STILLFIELD_MODEL_LABEL_MODEL_H_
