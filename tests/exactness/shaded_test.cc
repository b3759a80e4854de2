// Labels, classes and uneven light drawn together, against closed forms.
//
// Sources  B-splines by the recursion of de Boor (1978); the conditional of the light by Eigen from
//          the equations of constrained least squares; the posterior of labels and light on a 3 x 2
//          field by enumeration of all labels, the light integrated out in closed form (a Gaussian
//          vector); the whole chain by the joint distribution test of Geweke (2004)
// Error    4 standard errors a comparison (6.3e-5), about 90 comparisons: 0.6 % in all; fixed seeds
#include "sampler/shaded_chain.h"

#include <Eigen/Dense>
#include <catch2/catch.hpp>
#include <cmath>

#include "exactness/batch_means.h"
#include "exactness/test_field.h"

using namespace stillfield;
using namespace stillfield::exactness;

namespace {

double spline(int i, int degree, double t) {  // knots at the whole numbers; support [i - 3, i + 1]
  const double first = i - 3;
  if (degree == 0) return t >= first && t < first + 1 ? 1.0 : 0.0;
  return (t - first) / degree * spline(i, degree - 1, t) +
         (first + degree + 1 - t) / degree * spline(i + 1, degree - 1, t);
}

// Pixels in rows, coefficients in columns.
Eigen::MatrixXd design(int width, int height, int side) {
  Eigen::MatrixXd b(width * height, side * side);
  for (int p = 0; p < width * height; ++p) {
    const double tx = p % width * (side - 3.0) / (width - 1);
    const double ty = p / width * (side - 3.0) / (height - 1);
    for (int c = 0; c < side * side; ++c) {
      b(p, c) = spline(c % side, 3, tx) * spline(c / side, 3, ty);
    }
  }
  return b;
}

Eigen::MatrixXd precision(int side, const SurfacePrior& prior) {
  const int n = side * side;
  Eigen::MatrixXd q = Eigen::MatrixXd::Identity(n, n) / (prior.spread * prior.spread);
  const auto add = [&](int at, int step) {
    Eigen::VectorXd d = Eigen::VectorXd::Zero(n);
    d(at) = 1;
    d(at + step) = -2;
    d(at + 2 * step) = 1;
    q += d * d.transpose() / (prior.bend * prior.bend);
  };
  for (int r = 0; r < side; ++r) {
    for (int c = 0; c < side; ++c) {
      if (c + 2 < side) add(r * side + c, 1);
      if (r + 2 < side) add(r * side + c, side);
    }
  }
  return q;
}

// Covariance of a Gaussian with this precision, given that a . c is fixed.
Eigen::MatrixXd constrained_covariance(const Eigen::MatrixXd& q, const Eigen::VectorXd& a) {
  const Eigen::MatrixXd inverse = q.inverse();
  const Eigen::VectorXd v = inverse * a;
  return inverse - v * v.transpose() / a.dot(v);
}

Eigen::VectorXd frame_mean(const Eigen::MatrixXd& design) {
  return design.colwise().mean().transpose();
}

Eigen::VectorXd vector_of(const std::vector<double>& v) {
  return Eigen::Map<const Eigen::VectorXd>(v.data(), static_cast<Eigen::Index>(v.size()));
}

// 3 x 2 pixels, one of them missing, two classes that overlap.
FieldSpec small_spec() {
  FieldSpec spec;
  spec.width = 3;
  spec.height = 2;
  spec.level = {9, 15, 11, 18, 30, 13};
  spec.levels = 30;
  spec.model.prior = {{0.0, 0.3}, 0.6};
  spec.model.classes = {{10.0, 15.0}, {2.5, 2.0}, false};
  return spec;
}

}  // namespace

TEST_CASE("light given labels is drawn from its Gaussian conditional") {
  constexpr int kWidth = 6, kHeight = 5, kSide = 5, kDraws = 20000;
  const SurfacePrior prior{0.2, 0.6};
  const Eigen::MatrixXd b = design(kWidth, kHeight, kSide);
  const SurfaceBasis basis = make_surface_basis({kWidth, kHeight}, kSide);
  RandomStream random(chain_key(5, 0), Purpose::kSimulation);
  SurfaceSums sums(basis, kHeight);
  Eigen::MatrixXd a = precision(kSide, prior);
  Eigen::VectorXd right = a * Eigen::VectorXd::Ones(kSide * kSide);
  for (int y = 0; y < kHeight; ++y) {
    std::vector<double> weight(kWidth), value(kWidth);
    for (int x = 0; x < kWidth; ++x) {
      if ((x + 2 * y) % 5 == 0) continue;  // nothing observed
      const auto i = static_cast<std::size_t>(x);
      weight[i] = 1 + 20 * random.uniform();
      value[i] = weight[i] * (1 + 0.3 * random.normal());
      const Eigen::VectorXd row = b.row(y * kWidth + x).transpose();
      a += weight[i] * row * row.transpose();
      right += value[i] * row;
    }
    sums.set_row(y, weight.data(), value.data());
  }
  const Eigen::VectorXd mean = frame_mean(b);
  REQUIRE((mean - vector_of(basis.mean)).norm() < 1e-14);
  const Eigen::MatrixXd covariance = constrained_covariance(a, mean);
  const Eigen::VectorXd free = a.inverse() * right;
  const Eigen::VectorXd v = a.inverse() * mean;
  const Eigen::VectorXd exact = free - v * (mean.dot(free) - 1) / mean.dot(v);
  const SurfaceConditional conditional(sums, prior);
  CHECK((vector_of(conditional.mean()) - exact).norm() < 1e-11);

  // Directions of the covariance: independent, of known variance; the last of none at all.
  const Eigen::SelfAdjointEigenSolver<Eigen::MatrixXd> axes(covariance);
  Eigen::MatrixXd z(kSide * kSide, kDraws);
  double off = 0;
  for (int i = 0; i < kDraws; ++i) {
    const Eigen::VectorXd c = vector_of(conditional.draw(random));
    off = std::max(off, std::fabs(mean.dot(c) - 1));
    z.col(i) = axes.eigenvectors().transpose() * (c - exact);
  }
  CHECK(off < 1e-11);
  CHECK(axes.eigenvalues()(0) < 1e-12);
  for (Eigen::Index d = 1; d < z.rows(); ++d) {
    const double variance = axes.eigenvalues()(d);
    CAPTURE(d, variance);
    CHECK(std::fabs(z.row(d).mean()) < 4 * std::sqrt(variance / kDraws));
    CHECK(std::fabs(z.row(d).squaredNorm() / kDraws / variance - 1) < 4 * std::sqrt(2.0 / kDraws));
  }
}

TEST_CASE("labels and light of a 3 x 2 field have their exact posterior") {
  constexpr int kSide = 4, kPixels = 6;
  const FieldSpec spec = small_spec();
  const Shading shading{make_surface_basis({3, 2}, kSide), {0.3, 0.5}};
  const Eigen::MatrixXd b = design(3, 2, kSide);
  const Eigen::MatrixXd p = constrained_covariance(precision(kSide, shading.prior), frame_mean(b));
  const LabelModel& model = spec.model;

  Eigen::VectorXd label_two = Eigen::VectorXd::Zero(kPixels);
  Eigen::VectorXd light = Eigen::VectorXd::Zero(kPixels);
  double total = 0;
  for (int state = 0; state < 1 << kPixels; ++state) {
    const auto z = [state](int s) { return static_cast<std::size_t>(state >> s & 1); };
    double prior = 0;
    for (int s = 0; s < kPixels; ++s) {
      prior += model.prior.alpha[z(s)];
      if (s % 3 < 2) prior += model.prior.beta * (z(s) == z(s + 1));
      if (s < 3) prior += model.prior.beta * (z(s) == z(s + 3));
    }
    std::vector<int> seen;
    for (int s = 0; s < kPixels; ++s) {
      if (spec.level[static_cast<std::size_t>(s)] != spec.levels) seen.push_back(s);
    }
    const auto n = static_cast<Eigen::Index>(seen.size());
    Eigen::MatrixXd mb(n, kSide * kSide);
    Eigen::VectorXd error(n), noise(n);
    for (Eigen::Index i = 0; i < n; ++i) {
      const int s = seen[static_cast<std::size_t>(i)];
      const double mu = model.classes.mean[z(s)];
      mb.row(i) = mu * b.row(s);
      error(i) = spec.level[static_cast<std::size_t>(s)] - mu;
      noise(i) = model.classes.sd[z(s)] * model.classes.sd[z(s)];
    }
    Eigen::MatrixXd covariance = mb * p * mb.transpose();
    covariance.diagonal() += noise;
    const Eigen::VectorXd solved = covariance.ldlt().solve(error);
    const double weight =
        std::exp(prior - 0.5 * error.dot(solved)) / std::sqrt(covariance.determinant());
    total += weight;
    for (int s = 0; s < kPixels; ++s) label_two(s) += weight * static_cast<double>(z(s));
    light += weight * (Eigen::VectorXd::Ones(kPixels) + b * p * mb.transpose() * solved);
  }
  label_two /= total;
  light /= total;
  REQUIRE(label_two.minCoeff() > 0.02);
  REQUIRE((light - Eigen::VectorXd::Ones(kPixels)).cwiseAbs().maxCoeff() > 0.02);

  TestField field(spec);
  field.chain.light.assign(kSide * kSide, 1.0);
  std::vector<BatchMeans> two(kPixels, BatchMeans(200)), lit(kPixels, BatchMeans(200));
  for (int i = 0; i < 60000; ++i) {
    prepare_shaded_weights(field.field, shading, field.chain, field.serial, field.weights);
    field.sweep();
    const Volume<std::uint8_t> labels = image_labels(field.colouring, field.chain);
    RandomStream random(field.chain.key, Purpose::kParameters, field.chain.sweeps_done);
    draw_light(field.field, shading, labels.view(), field.serial, random, field.chain);
    for (int s = 0; s < kPixels; ++s) {
      const auto at = static_cast<std::size_t>(s);
      two[at].add(labels.at(s % 3, s / 3));
      lit[at].add(SurfaceRow(shading.basis, field.chain.light, s / 3).at(s % 3));
    }
  }
  for (int s = 0; s < kPixels; ++s) {
    const Estimate label = two[static_cast<std::size_t>(s)].estimate();
    const Estimate at = lit[static_cast<std::size_t>(s)].estimate();
    CAPTURE(s, label.mean, label_two(s), label.mcse, at.mean, light(s), at.mcse);
    CHECK(label.deviations(label_two(s)) < 4);
    CHECK(at.deviations(light(s)) < 4);
    CHECK(label.mcse < 0.006);
  }
}

// Draws of parameters, then data, then parameters again have the prior as their distribution.
TEST_CASE("data drawn from the chain's parameters leave the prior in place") {
  constexpr int kSide = 4, kPixels = 6, kDraws = 60000;
  const Shading shading{make_surface_basis({3, 2}, kSide), {0.2, 0.25}};
  const GaussianPrior prior{100.0, 4.0, 64.0, 12.0};
  FieldSpec spec = small_spec();
  spec.level = {1, 2, 3, 4, 5, 6};
  spec.levels = 60000;
  spec.origin = -200.0;
  spec.step = 0.01;
  spec.model.classes = {{95.0, 105.0}, {8.0, 8.0}, false};
  TestField field(spec);
  field.chain.light.assign(kSide * kSide, 1.0);
  LabelPosterior problem;
  problem.field = {&field.colouring, &field.grey, AlignedBuffer<std::uint16_t>()};
  problem.prior = prior;
  // Light at a corner, squared; class means, a deviation; what data tie together; labels.
  constexpr std::size_t kScalars = 7;
  const auto scalars = [&](const GaussianClasses& classes, double corner, double labels) {
    return std::array<double, kScalars>{
        corner,          (corner - 1) * (corner - 1), classes.mean[0],
        classes.mean[1], std::log(classes.sd[0]),     corner * classes.mean[1],
        labels};
  };

  const Eigen::MatrixXd b = design(3, 2, kSide);
  const Eigen::MatrixXd p = constrained_covariance(precision(kSide, shading.prior), frame_mean(b));
  const double corner_sd = std::sqrt((b.row(0) * p * b.row(0).transpose())(0, 0));
  std::vector<double> label_weight;
  double label_total = 0;
  for (int state = 0; state < 1 << kPixels; ++state) {
    double energy = 0;
    for (int s = 0; s < kPixels; ++s) {
      const int z = state >> s & 1;
      energy += spec.model.prior.alpha[static_cast<std::size_t>(z)];
      if (s % 3 < 2) energy += spec.model.prior.beta * (z == (state >> (s + 1) & 1));
      if (s < 3) energy += spec.model.prior.beta * (z == (state >> (s + 3) & 1));
    }
    label_weight.push_back(std::exp(energy));
    label_total += label_weight.back();
  }
  double expected_labels = 0;
  for (std::size_t state = 0; state < label_weight.size(); ++state) {
    expected_labels += label_weight[state] / label_total * __builtin_popcountll(state);
  }
  std::array<BatchMeans, kScalars> of_prior{BatchMeans(200), BatchMeans(200), BatchMeans(200),
                                            BatchMeans(200), BatchMeans(200), BatchMeans(200),
                                            BatchMeans(200)};
  auto of_chain = of_prior;
  RandomStream random(chain_key(77, 0), Purpose::kSimulation);
  for (int i = 0; i < kDraws; ++i) {
    GaussianClasses classes{{0, 0}, {0, 0}, false};
    do {
      for (std::size_t k = 0; k < 2; ++k) {
        const double variance = 0.5 * prior.nu * prior.variance / random.gamma(0.5 * prior.nu);
        classes.sd[k] = std::sqrt(variance);
        classes.mean[k] = prior.mean + std::sqrt(variance / prior.kappa) * random.normal();
      }
    } while (classes.mean[0] > classes.mean[1]);
    const auto values = scalars(classes, 1 + corner_sd * random.normal(), expected_labels);
    for (std::size_t j = 0; j < kScalars; ++j) of_prior[j].add(values[j]);
  }

  for (int i = 0; i < kDraws; ++i) {
    const Volume<std::uint8_t> labels = image_labels(field.colouring, field.chain);
    double twos = 0;
    std::fill(field.grey.histogram.begin(), field.grey.histogram.end(), 0);
    for (int s = 0; s < kPixels; ++s) {
      const std::size_t k = labels.at(s % 3, s / 3);
      twos += static_cast<double>(k);
      const double g = SurfaceRow(shading.basis, field.chain.light, s / 3).at(s % 3);
      const double y =
          g * field.chain.model.classes.mean[k] + field.chain.model.classes.sd[k] * random.normal();
      field.grey.level.at(s % 3, s / 3) = static_cast<std::uint16_t>(
          std::clamp(std::floor((y - spec.origin) / spec.step + 0.5), 0.0, 59999.0));
    }
    const double corner = SurfaceRow(shading.basis, field.chain.light, 0).at(0);
    const auto values = scalars(field.chain.model.classes, corner, twos);
    for (std::size_t j = 0; j < kScalars; ++j) of_chain[j].add(values[j]);
    problem.field.level = observe(field.colouring, field.grey).level;
    advance_shaded_chain(problem, shading, 1, field.serial, field.weights, field.chain);
  }
  for (std::size_t j = 0; j < kScalars; ++j) {
    const Estimate a = of_prior[j].estimate(), c = of_chain[j].estimate();
    CAPTURE(j, a.mean, a.mcse, c.mean, c.mcse);
    CHECK(std::fabs(a.mean - c.mean) < 4 * std::sqrt(a.mcse * a.mcse + c.mcse * c.mcse));
  }
}
