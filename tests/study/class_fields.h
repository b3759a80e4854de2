// Fields of several classes with known labels, not drawn from any label model.
#ifndef STILLFIELD_TESTS_STUDY_CLASS_FIELDS_H_
#define STILLFIELD_TESTS_STUDY_CLASS_FIELDS_H_

#include <cstdint>
#include <string>
#include <vector>

#include "core/volume.h"

namespace stillfield::study {

struct ClassField {
  Volume<std::uint8_t> labels;  // 0-based
  std::vector<double> shares;   // of the pixels, one a class
};

// family  "disks"    disks of radius 4 to 16 px of random classes on class 0 .. K - 1 as ground
//         "cells"    Voronoi cells of about 300 px, each of a random class
//         "blobs"    thresholds of smoothed noise: neighbouring classes lie side by side
// Classes have unequal shares; fields in which one has less than 5 % are drawn again.
ClassField draw_classes(const std::string& family, int side, int classes, std::uint64_t seed);

// label * contrast + N(0, 1), blurred before the noise by a Gaussian of standard deviation `blur`
// px (0: none).
Volume<float> render_classes(const ClassField& field, double contrast, double blur,
                             std::uint64_t seed);

}  // namespace stillfield::study

#endif  // STILLFIELD_TESTS_STUDY_CLASS_FIELDS_H_
