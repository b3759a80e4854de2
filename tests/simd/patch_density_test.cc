// Densities, products and scatter of patches against double precision by Eigen, and their bytes
// on every CPU target.
#include "simd/patch_density.h"

#include <Eigen/Dense>
#include <catch2/catch.hpp>
#include <cmath>
#include <cstring>
#include <vector>

#include "random/stream.h"
#include "simd/forced_target.h"

using namespace stillfield;
using namespace stillfield::testing;

namespace {

struct Problem {
  explicit Problem(int elements) : d(elements), stride(patch_stride(elements)) {
    RandomStream random({21, 7}, Purpose::kSimulation);
    const auto draw = [&random](std::vector<float>& v, std::size_t n, double sd) {
      for (std::size_t i = 0; i < n; ++i) v.push_back(static_cast<float>(sd * random.normal()));
    };
    draw(patches, static_cast<std::size_t>(d) * kDensityBatch, 2.0);
    draw(mean, static_cast<std::size_t>(stride), 1.0);
    draw(rows, kRows * static_cast<std::size_t>(stride), 2.0);
    draw(columns, static_cast<std::size_t>(d * stride), 0.3);
    h = Eigen::MatrixXd::Zero(d, d);
    row_blocks.assign(static_cast<std::size_t>(row_block_start(d / 4)), 0.0f);
    for (int r = 0; r < d; ++r) {
      for (int c = 0; c <= r; ++c) {
        const auto value = static_cast<float>((r == c ? 1.0 : 0.2) * (1.0 + random.uniform()));
        h(r, c) = double{value};
        row_blocks[static_cast<std::size_t>(row_block_start(r / 4) + 4 * c + r % 4)] = value;
      }
    }
    for (std::uint32_t i = 0; i < kRows; i += 1 + i % 3) {
      which.push_back(i);
      weight.push_back(static_cast<float>(random.uniform()));
    }
  }

  Eigen::VectorXd vector(const float* v) const {
    return Eigen::Map<const Eigen::VectorXf>(v, d).cast<double>();
  }

  static constexpr std::size_t kRows = 700;  // more than one chunk of the scatter
  int d, stride;
  std::vector<float> patches, mean, rows, columns, row_blocks, weight;
  std::vector<std::uint32_t> which;
  Eigen::MatrixXd h;
};

struct Results {
  explicit Results(const Problem& p)
      : log_density(kDensityBatch),
        product(static_cast<std::size_t>(p.stride)),
        scatter(static_cast<std::size_t>(p.d * p.stride), 0.0) {
    patch_log_densities(p.d, p.patches.data(), p.mean.data(), p.row_blocks.data(), -3.5f,
                        log_density.data());
    multiply_patch(p.d, p.columns.data(), p.rows.data(), p.mean.data(), p.mean.data(),
                   product.data());
    add_weighted_scatter(p.d, p.rows.data(), p.which, p.weight, p.mean.data(), scatter.data());
  }
  std::vector<float> log_density, product;
  std::vector<double> scatter;
};

template <class T>
bool same_bytes(const std::vector<T>& a, const std::vector<T>& b) {
  return a.size() == b.size() && std::memcmp(a.data(), b.data(), a.size() * sizeof(T)) == 0;
}

}  // namespace

TEST_CASE("patch densities, products and scatter agree with double precision") {
  for (const int d : {16, 36, 64}) {
    CAPTURE(d);
    const Problem p(d);
    const Results r(p);
    const Eigen::VectorXd mean = p.vector(p.mean.data());
    for (int b = 0; b < kDensityBatch; ++b) {
      Eigen::VectorXd y(d);
      for (int e = 0; e < d; ++e) {
        y[e] = double{p.patches[static_cast<std::size_t>(e * kDensityBatch + b)]};
      }
      const double expected = -3.5 - 0.5 * (p.h * (y - mean)).squaredNorm();
      CHECK(double{r.log_density[static_cast<std::size_t>(b)]} == Approx(expected).epsilon(1e-5));
    }
    Eigen::VectorXd product = mean;
    for (int c = 0; c < d; ++c) {
      product += p.vector(p.columns.data() + c * p.stride) *
                 (double{p.rows[static_cast<std::size_t>(c)]} - mean[c]);
    }
    CHECK((p.vector(r.product.data()) - product).cwiseAbs().maxCoeff() < 1e-4);
    Eigen::MatrixXd scatter = Eigen::MatrixXd::Zero(d, d);
    for (std::size_t i = 0; i < p.which.size(); ++i) {
      const Eigen::VectorXd off = p.vector(p.rows.data() + p.which[i] * p.stride) - mean;
      scatter += double{p.weight[i]} * off * off.transpose();
    }
    for (int i = 0; i < d; ++i) {
      for (int j = 0; j <= i; ++j) {
        const double got = r.scatter[static_cast<std::size_t>(i * p.stride + j)];
        REQUIRE(std::abs(got - scatter(i, j)) < 1e-5 * scatter(i, i) + 1e-2);
      }
    }
  }
}

TEST_CASE("patch densities, products and scatter give the same bytes on every CPU target") {
  for (const int d : {16, 36, 64}) {
    const Problem p(d);
    const Results best(p);
    for_each_target([&](const std::string& name) {
      CAPTURE(d, name);
      const Results r(p);
      CHECK(same_bytes(r.log_density, best.log_density));
      CHECK(same_bytes(r.product, best.product));
      CHECK(same_bytes(r.scatter, best.scatter));
    });
  }
}
