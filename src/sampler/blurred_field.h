// A label field seen through the optics' blur, and what its Gibbs updates need at hand.
//
// Model    y_t ~ N( (h * mu_z)(t), sd_{z_t}^2 / w_t ), (h * m)(t) = 1/n(t) sum_s h(t-s) m(s)
//          (model/blur.h); w_t > 0 fixed, 0 where the pixel is missing
// Scaled   with Y_t = n(t) y_t and P_t = w_t / (n(t)^2 sd_{z_t}^2) the border needs no care:
//            rho_t = Y_t - sum_s h(t-s) mu_{z_s}            residual
//            c(u)  = sum_t h(t-u) P_t rho_t                 slope of log p(y | z) in the mean at u
//            q(u)  = sum_t h(t-u)^2 P_t                     its curvature
//          Changing the mean at s by d changes log p(y | z) by d c(s) - d^2 q(s) / 2, all P fixed
// Units    grey levels (GreyLevels): y = level, mu = (mean - origin) / step
// Bytes    float planes, sums in a fixed order; one chain is the work of one thread
#ifndef STILLFIELD_SAMPLER_BLURRED_FIELD_H_
#define STILLFIELD_SAMPLER_BLURRED_FIELD_H_

#include <vector>

#include "model/blur.h"
#include "model/grey_levels.h"
#include "model/label_model.h"
#include "sampler/padded_plane.h"

namespace stillfield {

// Means and inverse variances in levels.
struct LevelClasses {
  std::vector<double> mean;
  std::vector<double> precision;  // 1 / sd^2
};
LevelClasses level_classes(const GreyLevels& grey, const GaussianClasses& classes);

struct BlurredField {
  const GreyLevels* grey = nullptr;
  BlurKernel kernel;
  PaddedPlane<std::uint8_t> labels;  // kGuardLabel in the margin
  PaddedPlane<float> relative;       // w_t / n(t)^2
  PaddedPlane<float> residual;       // rho
  PaddedPlane<float> slope;          // c
  PaddedPlane<float> curvature;      // q
};

// `weight` holds w_t; empty: 1. Missing pixels get 0 in any case. Labels start as class 0.
// Throws Error(kUsage) for volumes.
BlurredField open_blurred_field(const GreyLevels& grey, const BlurKernel& kernel,
                                const Volume<float>& weight = {});

// Takes another kernel; `weight` as above. Call refresh_blurred_field afterwards.
void set_blur(const BlurKernel& kernel, const Volume<float>& weight, BlurredField& field);

void set_labels(View<const std::uint8_t> labels, BlurredField& field);
void get_labels(const BlurredField& field, View<std::uint8_t> labels);

// Residual alone from the labels, then slope and curvature as well.
void refresh_residual(const LevelClasses& classes, BlurredField& field);
void refresh_blurred_field(const LevelClasses& classes, BlurredField& field);

// log p(y | z) up to a constant that depends on neither labels, classes nor blur; from the
// residual plane. Row sums in row order.
double log_likelihood(const LevelClasses& classes, const BlurredField& field);

// The same under another kernel, which the field does not take over.
double log_likelihood_under(const BlurKernel& kernel, const LevelClasses& classes,
                            const BlurredField& field);

}  // namespace stillfield

#endif  // STILLFIELD_SAMPLER_BLURRED_FIELD_H_
