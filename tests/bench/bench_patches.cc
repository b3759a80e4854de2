// Cost of the patch field's kernels, and of the same group update written with Eigen.
//
// usage: bench_patches
// Eigen here is what the house builds: baseline x86-64, single precision, one group at a time; its
// random numbers and bookkeeping are left out, so the comparison flatters it. Thread time, median
// of 7 interleaved repetitions. Groups of 40 patches.
#include <Eigen/Dense>
#include <cstdio>
#include <vector>

#include "bench/timing.h"
#include "core/aligned_buffer.h"
#include "random/stream.h"
#include "sampler/patch_wishart.h"
#include "simd/normals.h"
#include "simd/patch_group.h"
#include "simd/target.h"

using namespace stillfield;

namespace {

constexpr int kMembers = 40;
constexpr int kRepetitions = 7;
constexpr PhiloxKey kKey{1, 2};

AlignedBuffer<float> lanes(int n) {
  return AlignedBuffer<float>(static_cast<std::size_t>(n) * kPatchLanes);
}

// Sixteen groups through our kernels.
class KernelGroups {
 public:
  explicit KernelGroups(int d)
      : d_(d),
        value_(lanes(kMembers * d)),
        clean_(lanes(kMembers * d)),
        mean_(lanes(kMembers * d)),
        variance_(lanes(d)),
        centre_(lanes(d)),
        scale_(lanes(static_cast<int>(triangle_elements(d)))),
        factor_(lanes(static_cast<int>(triangle_elements(d)))) {
    standard_normals(kKey, {0, 1, 0, 0}, value_.size(), value_.data());
  }

  void draw_random(std::uint32_t round) {
    fill_bartlett({kKey, 0, round}, d_, d_ + 11 + kMembers, factor_.data());
    standard_normals(kKey, {0, 0, round, 1}, centre_.size(), centre_.data());
    standard_normals(kKey, {0, 0, round, 2}, clean_.size(), clean_.data());
  }

  void update() {
    PatchGroups g;
    g.elements = d_;
    g.members = kMembers;
    g.value = value_.data();
    g.clean = clean_.data();
    g.scale = scale_.data();
    g.factor = factor_.data();
    g.centre = centre_.data();
    g.mean_sum = mean_.data();
    g.variance_sum = variance_.data();
    for (int i = 0; i < d_; ++i) {
      for (int lane = 0; lane < kPatchLanes; ++lane) {
        scale_[static_cast<std::size_t>(triangle_at(i, i) * kPatchLanes + lane)] = 10.0f;
      }
    }
    draw_group_parameters(g);
    update_group_patches(g, true, true);
  }

 private:
  int d_;
  AlignedBuffer<float> value_, clean_, mean_, variance_, centre_, scale_, factor_;
};

// One group with Eigen: the same algebra.
class EigenGroup {
 public:
  explicit EigenGroup(int d)
      : value_(Eigen::MatrixXf::Random(d, kMembers)),
        clean_(Eigen::MatrixXf::Random(d, kMembers)),
        mean_(Eigen::MatrixXf::Zero(d, kMembers)),
        normals_(Eigen::MatrixXf::Random(d, kMembers)),
        triangle_(Eigen::MatrixXf::Random(d, d)),
        variance_(Eigen::VectorXf::Zero(d)) {
    for (int i = 0; i < d; ++i) triangle_(i, i) = 8.0f;
  }

  void update() {
    const auto d = value_.rows();
    const Eigen::VectorXf average = clean_.rowwise().mean();
    const Eigen::MatrixXf off = clean_.colwise() - average;
    Eigen::MatrixXf a = 10.0f * Eigen::MatrixXf::Identity(d, d);
    a.selfadjointView<Eigen::Lower>().rankUpdate(off);
    const Eigen::LLT<Eigen::MatrixXf> l(a);
    Eigen::MatrixXf dd = triangle_.triangularView<Eigen::Lower>();
    l.matrixL().solveInPlace<Eigen::OnTheRight>(dd);
    const Eigen::VectorXf mu =
        average + dd.triangularView<Eigen::Lower>().solve(normals_.col(0)) / 6.3f;
    Eigen::MatrixXf q = Eigen::MatrixXf::Identity(d, d);
    q.selfadjointView<Eigen::Lower>().rankUpdate(dd.transpose());
    const Eigen::LLT<Eigen::MatrixXf> r(q);
    Eigen::MatrixXf v = Eigen::MatrixXf::Identity(d, d);
    r.matrixL().solveInPlace(v);
    const Eigen::MatrixXf rotated = v.triangularView<Eigen::Lower>() * (value_.colwise() - mu);
    mean_ += v.transpose().triangularView<Eigen::Upper>() * rotated;
    mean_.colwise() += mu;
    clean_.noalias() = v.transpose().triangularView<Eigen::Upper>() * (rotated + normals_);
    clean_.colwise() += mu;
    variance_ += v.colwise().squaredNorm().transpose();
  }

 private:
  Eigen::MatrixXf value_, clean_, mean_, normals_, triangle_;
  Eigen::VectorXf variance_;
};

}  // namespace

int main() {
  std::printf(
      "| target | patch | group update, us | random numbers, us | Eigen, us | Eigen / ours |\n");
  std::printf("|---|---|---|---|---|---|\n");
  for (const std::string& target : cpu_targets()) {
    force_cpu_target(target);
    for (const int side : {6, 8}) {
      KernelGroups ours(side * side);
      EigenGroup theirs(side * side);
      std::vector<double> kernel, random, eigen;
      for (int i = 0; i < kRepetitions; ++i) {
        random.push_back(
            bench::thread_ns([&] { ours.draw_random(static_cast<std::uint32_t>(i)); }));
        kernel.push_back(bench::thread_ns([&] { ours.update(); }));
        eigen.push_back(bench::thread_ns([&] {
          for (int lane = 0; lane < kPatchLanes; ++lane) theirs.update();
        }));
      }
      const auto per_group = [](const std::vector<double>& ns) {
        return bench::median(ns) / 1e3 / kPatchLanes;
      };
      std::printf("| %s | %d | %.1f | %.1f | %.1f | %.1f |\n", target.c_str(), side,
                  per_group(kernel), per_group(random), per_group(eigen),
                  per_group(eigen) / per_group(kernel));
    }
  }
}
