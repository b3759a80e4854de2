#include "exactness/class_evidence.h"

#include <algorithm>
#include <boost/math/distributions/students_t.hpp>
#include <cmath>

namespace stillfield::exactness {
namespace {

using boost::math::students_t;

struct Moments {
  double n = 0.0, mean = 0.0, squares = 0.0;
};

Moments moments_of(const std::vector<double>& grey, const Labels& labels, int k) {
  Moments m;
  for (std::size_t s = 0; s < grey.size(); ++s) {
    if (labels[s] != k) continue;
    m.n += 1.0;
    const double d = grey[s] - m.mean;
    m.mean += d / m.n;
    m.squares += d * (grey[s] - m.mean);
  }
  return m;
}

// Parameters of the normal-inverse-gamma posterior of one class.
struct Updated {
  double kappa, mean, shape, scale;  // sd^2 ~ Inv-Gamma(shape, scale)
};

Updated update(const Moments& m, const GaussianPrior& p) {
  Updated u;
  u.kappa = p.kappa + m.n;
  u.mean = (p.kappa * p.mean + m.n * m.mean) / u.kappa;
  u.shape = (p.nu + m.n) / 2.0;
  u.scale = (p.nu * p.variance + m.squares +
             p.kappa * m.n / u.kappa * (m.mean - p.mean) * (m.mean - p.mean)) /
            2.0;
  return u;
}

// P(mean_1 < ... < mean_K) and the same with mean_k < threshold, for independent means, by the
// midpoint rule in the distribution function of one mean: u = F(x).
struct OrderIntegral {
  double all = 0.0;
  std::vector<double> below;
};

double lower(const MeanPosterior& m, double x) {
  return boost::math::cdf(students_t(m.freedom), (x - m.location) / m.scale);
}

OrderIntegral integrate_order(const std::vector<MeanPosterior>& mean, double threshold) {
  constexpr int kPoints = 400;
  OrderIntegral result;
  result.below.assign(mean.size(), 0.0);
  const MeanPosterior& middle = mean[1];
  for (int i = 0; i < kPoints; ++i) {
    const double u = (i + 0.5) / kPoints;
    const double x =
        middle.location + middle.scale * boost::math::quantile(students_t(middle.freedom), u);
    const double first = lower(mean[0], x);
    const double last = mean.size() > 2 ? 1.0 - lower(mean[2], x) : 1.0;
    const double cut = lower(mean[0], std::min(x, threshold));
    result.all += first * last / kPoints;
    result.below[0] += cut * last / kPoints;
    if (x < threshold) result.below[1] += first * last / kPoints;
    if (mean.size() > 2 && x < threshold) {
      result.below[2] += first * (lower(mean[2], threshold) - lower(mean[2], x)) / kPoints;
    }
  }
  for (double& b : result.below) b /= result.all;
  return result;
}

}  // namespace

Evidence own_variance_evidence(const std::vector<double>& grey, const Labels& labels, int classes,
                               const GaussianPrior& prior, double threshold) {
  Evidence e;
  std::vector<MeanPosterior> means;
  const double shape0 = prior.nu / 2.0, scale0 = prior.nu * prior.variance / 2.0;
  for (int k = 0; k < classes; ++k) {
    const Updated u = update(moments_of(grey, labels, k), prior);
    e.log_value += std::lgamma(u.shape) - std::lgamma(shape0) + shape0 * std::log(scale0) -
                   u.shape * std::log(u.scale) + 0.5 * std::log(prior.kappa / u.kappa);
    means.push_back({u.mean, std::sqrt(u.scale / (u.shape * u.kappa)), 2.0 * u.shape});
  }
  const OrderIntegral order = integrate_order(means, threshold);
  e.log_value += std::log(order.all);
  e.below = order.below;
  return e;
}

Evidence shared_variance_evidence(const std::vector<double>& grey, const Labels& labels,
                                  const GaussianPrior& prior) {
  Evidence e;
  double shape = prior.nu / 2.0, scale = prior.nu * prior.variance / 2.0;
  std::vector<Updated> classes;
  for (int k = 0; k < 2; ++k) {
    const Moments m = moments_of(grey, labels, k);
    const Updated u = update(m, prior);
    shape += m.n / 2.0;
    scale += u.scale - prior.nu * prior.variance / 2.0;
    e.log_value += 0.5 * std::log(prior.kappa / u.kappa);
    classes.push_back(u);
  }
  e.log_value += std::lgamma(shape) - shape * std::log(scale);
  // mean_2 - mean_1 is Student-t around the difference of the centres.
  const double spread =
      std::sqrt(scale / shape * (1.0 / classes[0].kappa + 1.0 / classes[1].kappa));
  const double t = (classes[1].mean - classes[0].mean) / spread;
  e.log_value += std::log(boost::math::cdf(students_t(2.0 * shape), t));
  return e;
}

}  // namespace stillfield::exactness
