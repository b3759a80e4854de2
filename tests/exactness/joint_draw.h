// Draws from the joint distribution of parameters, labels and grey values of `--coupling sampled`,
// for a field so small that ln Z is known; and the program's Gibbs sampler on one of them.
//
// Prior    beta uniform on [0, max_coupling], means and variances as in model/gaussian_draw.h
// Block    two sweeps of the labels, then class parameters, then the coupling
#ifndef STILLFIELD_TESTS_EXACTNESS_JOINT_DRAW_H_
#define STILLFIELD_TESTS_EXACTNESS_JOINT_DRAW_H_

#include <cstdint>

#include "exactness/test_field.h"
#include "sampler/path_sampling.h"

namespace stillfield::exactness {

inline constexpr int kJointSide = 6;
inline const GaussianPrior kJointPrior{100.0, 0.4, 25.0, 5.0};

// ln Z of the field, two classes, by transfer matrices on a fine grid.
LogPartition exact_log_partition(const Neighbourhood& neighbourhood);

struct JointDraw {
  FieldSpec spec;  // grey values, and the model they were drawn with
  Labels labels;
};

JointDraw draw_jointly(const LogPartition& log_partition, std::uint64_t seed);

// The parts of a block.
void sweep_block(TestField& field);
void draw_parameters(const LogPartition& log_partition, TestField& field);

}  // namespace stillfield::exactness

#endif  // STILLFIELD_TESTS_EXACTNESS_JOINT_DRAW_H_
