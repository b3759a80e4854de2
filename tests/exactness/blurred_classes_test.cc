// Draws of class parameters given blurred labels against the normal-inverse-gamma posterior of
// the linear model (Gelman et al., Bayesian Data Analysis, 3rd ed., 14.2 and 3.3).
//
// Error    4 Monte Carlo standard errors from 400 batch means of 100 draws (false alarms 6.3e-5 a
//          comparison, 0.1 % in all; seeds fixed); variances within 5 %
#include <Eigen/Dense>
#include <catch2/catch.hpp>
#include <cmath>

#include "exactness/batch_means.h"
#include "exactness/test_field.h"
#include "sampler/blurred_classes.h"

using namespace stillfield;
using namespace stillfield::exactness;

namespace {

constexpr int kWidth = 11, kHeight = 9, kClasses = 3;
constexpr double kBlur = 0.9;

FieldSpec striped_spec(Labels& z) {
  FieldSpec spec = random_spec(kWidth, kHeight, Connectivity::kFour, kClasses, 0.5, 5);
  spec.model.classes.shared_variance = true;
  std::fill_n(spec.model.classes.sd.begin(), kClasses, 8.0);
  RandomStream random(chain_key(5, 9), Purpose::kSimulation);
  spec.level.clear();
  for (int s = 0; s < kWidth * kHeight; ++s) {
    z.push_back(static_cast<std::uint8_t>((s % kWidth) / 4));
    const double level = 40.0 + 70.0 * z.back() + 12.0 * random.normal();
    spec.level.push_back(static_cast<std::uint16_t>(s == 17 ? 256.0 : level));  // one missing
  }
  return spec;
}

Eigen::MatrixXd design(const Labels& z) {
  const int r = static_cast<int>(std::ceil(2.5 * kBlur));
  Eigen::MatrixXd x = Eigen::MatrixXd::Zero(kWidth * kHeight, kClasses);
  for (int t = 0; t < kWidth * kHeight; ++t) {
    for (int s = 0; s < kWidth * kHeight; ++s) {
      const int dx = s % kWidth - t % kWidth, dy = s / kWidth - t / kWidth;
      if (std::abs(dx) > r || std::abs(dy) > r) continue;
      x(t, z[static_cast<std::size_t>(s)]) +=
          std::exp(-(dx * dx + dy * dy) / (2.0 * kBlur * kBlur));
    }
    x.row(t) /= x.row(t).sum();
  }
  return x;
}

}  // namespace

TEST_CASE("blurred classes: means and shared variance follow the closed form") {
  Labels z;
  const FieldSpec spec = striped_spec(z);
  const GaussianPrior prior{30.0, 0.5, 90.0, 3.0};

  Eigen::MatrixXd x = design(z);
  Eigen::VectorXd y(kWidth * kHeight);
  int observed = 0;
  for (int t = 0; t < y.size(); ++t) {
    const std::uint16_t level = spec.level[static_cast<std::size_t>(t)];
    y(t) = spec.origin + spec.step * level;
    if (level == spec.levels) {
      y(t) = 0.0;
      x.row(t).setZero();
    } else {
      ++observed;
    }
  }
  const Eigen::MatrixXd a =
      x.transpose() * x + prior.kappa * Eigen::MatrixXd::Identity(kClasses, kClasses);
  const Eigen::VectorXd b =
      x.transpose() * y + Eigen::VectorXd::Constant(kClasses, prior.kappa * prior.mean);
  const Eigen::VectorXd centre = a.ldlt().solve(b);
  const double shape = 0.5 * (prior.nu + observed);
  const double scale = 0.5 * (prior.nu * prior.variance + y.squaredNorm() +
                              kClasses * prior.kappa * prior.mean * prior.mean - centre.dot(b));
  const Eigen::MatrixXd covariance = scale / (shape - 1.0) * a.inverse();

  const TestField start(spec);
  BlurredField field = open_blurred_field(start.grey, make_blur_kernel(kBlur));
  Volume<std::uint8_t> labels({kWidth, kHeight});
  for (int s = 0; s < kWidth * kHeight; ++s) {
    labels.at(s % kWidth, s / kWidth) = z[static_cast<std::size_t>(s)];
  }
  set_labels(labels.view(), field);
  GaussianClasses classes = spec.model.classes;
  std::vector<BatchMeans> mean(kClasses, BatchMeans(100));
  BatchMeans variance(100);
  std::vector<double> squares(kClasses, 0.0);
  double cross = 0.0;
  const int draws = 40000;
  RandomStream random(chain_key(5, 0), Purpose::kParameters);
  for (int i = -100; i < draws; ++i) {
    refresh_residual(level_classes(start.grey, classes), field);
    draw_blurred_classes(prior, random, field, classes);
    if (i < 0) continue;
    for (std::size_t k = 0; k < kClasses; ++k) {
      mean[k].add(classes.mean[k]);
      const double d = classes.mean[k] - centre(static_cast<int>(k));
      squares[k] += d * d / draws;
    }
    cross += (classes.mean[0] - centre(0)) * (classes.mean[1] - centre(1)) / draws;
    variance.add(classes.sd[0] * classes.sd[0]);
  }
  for (int k = 0; k < kClasses; ++k) {
    const Estimate e = mean[static_cast<std::size_t>(k)].estimate();
    CAPTURE(k, e.mean, e.mcse, centre(k));
    CHECK(e.deviations(centre(k)) <= 4.0);
    CHECK(squares[static_cast<std::size_t>(k)] == Approx(covariance(k, k)).epsilon(0.05));
  }
  CHECK(std::fabs(cross - covariance(0, 1)) <
        0.05 * std::sqrt(covariance(0, 0) * covariance(1, 1)));
  const Estimate v = variance.estimate();
  CAPTURE(v.mean, v.mcse, scale / (shape - 1.0));
  CHECK(v.deviations(scale / (shape - 1.0)) <= 4.0);
}

TEST_CASE("blurred classes: own deviations are drawn from their conditional") {
  // Given labels and means, sd_k^2 is inverse gamma; every draw starts from the same means.
  Labels z;
  FieldSpec spec = striped_spec(z);
  spec.model.classes.shared_variance = false;
  const TestField start(spec);
  BlurredField field = open_blurred_field(start.grey, make_blur_kernel(kBlur));
  Volume<std::uint8_t> labels({kWidth, kHeight});
  for (int s = 0; s < kWidth * kHeight; ++s) {
    labels.at(s % kWidth, s / kWidth) = z[static_cast<std::size_t>(s)];
  }
  set_labels(labels.view(), field);
  const GaussianPrior prior{30.0, 0.5, 90.0, 3.0};
  const GaussianClasses fixed = spec.model.classes;
  refresh_residual(level_classes(start.grey, fixed), field);
  const Eigen::MatrixXd x = design(z);
  std::vector<double> shape(kClasses, 0.5 * (prior.nu + 1.0)), scale(kClasses);
  for (std::size_t k = 0; k < kClasses; ++k) {
    const double d = fixed.mean[k] - prior.mean;
    scale[k] = 0.5 * (prior.nu * prior.variance + prior.kappa * d * d);
  }
  for (int t = 0; t < kWidth * kHeight; ++t) {
    const std::uint16_t level = spec.level[static_cast<std::size_t>(t)];
    if (level == spec.levels) continue;
    double r = spec.origin + spec.step * level;
    for (int k = 0; k < kClasses; ++k) r -= x(t, k) * fixed.mean[static_cast<std::size_t>(k)];
    shape[z[static_cast<std::size_t>(t)]] += 0.5;
    scale[z[static_cast<std::size_t>(t)]] += 0.5 * r * r;
  }
  std::vector<BatchMeans> variance(kClasses, BatchMeans(100));
  RandomStream random(chain_key(6, 0), Purpose::kParameters);
  for (int i = 0; i < 20000; ++i) {
    GaussianClasses classes = fixed;
    draw_blurred_classes(prior, random, field, classes);
    for (std::size_t k = 0; k < kClasses; ++k) {
      variance[k].add(classes.sd[k] * classes.sd[k]);
    }
  }
  for (std::size_t k = 0; k < kClasses; ++k) {
    const Estimate e = variance[k].estimate();
    CAPTURE(k, e.mean, e.mcse, scale[k] / (shape[k] - 1.0));
    CHECK(e.deviations(scale[k] / (shape[k] - 1.0)) <= 4.0);
  }
}
