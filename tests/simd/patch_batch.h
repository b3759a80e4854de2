// Batches of 16 problems for the patch kernels, and their lanes as Eigen matrices.
#ifndef STILLFIELD_TESTS_SIMD_PATCH_BATCH_H_
#define STILLFIELD_TESTS_SIMD_PATCH_BATCH_H_

#include <Eigen/Dense>

#include "core/aligned_buffer.h"
#include "random/stream.h"
#include "simd/patch_group.h"

namespace stillfield::testing {

// Everything draw_group_parameters and update_group_patches touch.
struct GroupMemory {
  GroupMemory(int elements, int group)
      : d(elements),
        members(group),
        value(lanes(group * elements)),
        clean(lanes(group * elements)),
        mean_sum(lanes(group * elements)),
        variance_sum(lanes(elements)),
        centre(lanes(elements)),
        prior_mean(lanes(elements)),
        scale(lanes(static_cast<int>(triangle_elements(elements)))),
        factor(lanes(static_cast<int>(triangle_elements(elements)))) {}

  static AlignedBuffer<float> lanes(int n) {
    return AlignedBuffer<float>(static_cast<std::size_t>(n) * kPatchLanes);
  }

  PatchGroups groups(float prior_weight) {
    PatchGroups g;
    g.elements = d;
    g.members = members;
    g.value = value.data();
    g.clean = clean.data();
    g.scale = scale.data();
    g.factor = factor.data();
    g.centre = centre.data();
    g.prior_weight = prior_weight;
    g.prior_mean = prior_mean.data();
    g.mean_sum = mean_sum.data();
    g.variance_sum = variance_sum.data();
    return g;
  }

  int d, members;
  AlignedBuffer<float> value, clean, mean_sum, variance_sum, centre, prior_mean, scale, factor;
};

inline void fill_normal(RandomStream& random, double sd, AlignedBuffer<float>& out) {
  for (float& v : out) v = static_cast<float>(sd * random.normal());
}

// Vector `first`, `first + d` ... of a lane.
inline Eigen::VectorXd lane_vector(const AlignedBuffer<float>& a, int index, int d, int lane) {
  Eigen::VectorXd v(d);
  for (int e = 0; e < d; ++e) {
    v[e] = double{a[static_cast<std::size_t>((index * d + e) * kPatchLanes + lane)]};
  }
  return v;
}

inline void set_lane_vector(const Eigen::VectorXd& v, int index, int lane,
                            AlignedBuffer<float>& a) {
  const int d = static_cast<int>(v.size());
  for (int e = 0; e < d; ++e) {
    a[static_cast<std::size_t>((index * d + e) * kPatchLanes + lane)] = static_cast<float>(v[e]);
  }
}

inline Eigen::MatrixXd lane_triangle(const AlignedBuffer<float>& a, int d, int lane) {
  Eigen::MatrixXd m = Eigen::MatrixXd::Zero(d, d);
  for (int r = 0; r < d; ++r) {
    for (int c = 0; c <= r; ++c) {
      m(r, c) = double{a[static_cast<std::size_t>(triangle_at(r, c) * kPatchLanes + lane)]};
    }
  }
  return m;
}

inline void set_lane_triangle(const Eigen::MatrixXd& m, int lane, AlignedBuffer<float>& a) {
  for (int r = 0; r < m.rows(); ++r) {
    for (int c = 0; c <= r; ++c) {
      a[static_cast<std::size_t>(triangle_at(r, c) * kPatchLanes + lane)] =
          static_cast<float>(m(r, c));
    }
  }
}

}  // namespace stillfield::testing

#endif  // STILLFIELD_TESTS_SIMD_PATCH_BATCH_H_
