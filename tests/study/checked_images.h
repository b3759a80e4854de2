// Images for the study of warnings: half of them break the model of `segment`, half do not.
//
// Classes  means 90, 140, 190 grey values; noise sigma times their distance of 50
// Shapes   disks (synthetic.h), or blobs: Gaussian-smoothed noise cut at fixed quantiles
// Stored   as floats, or rounded to 8 bits and limited to 0..255
#ifndef STILLFIELD_TESTS_STUDY_CHECKED_IMAGES_H_
#define STILLFIELD_TESTS_STUDY_CHECKED_IMAGES_H_

#include <cstdint>
#include <string>
#include <vector>

#include "core/volume.h"

namespace stillfield::study {

struct CheckedImage {
  std::string fault;  // "none", "correlated noise", "shading", "class too few", ...
  double size_of_fault = 0;
  int side = 128;
  bool disks = true;
  int true_classes = 2;
  int asked_classes = 2;
  double sigma = 0.4;
  bool eight_bits = false;
  std::uint64_t seed = 1;
};

// 50 with a fault, then 50 without.
std::vector<CheckedImage> checked_images();

Volume<float> draw(const CheckedImage& image);

}  // namespace stillfield::study

#endif  // STILLFIELD_TESTS_STUDY_CHECKED_IMAGES_H_
