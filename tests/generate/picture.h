// A demo picture: clean brightness, true labels, and the steps that all scenes share.
#ifndef STILLFIELD_TESTS_GENERATE_PICTURE_H_
#define STILLFIELD_TESTS_GENERATE_PICTURE_H_

#include <cstdint>
#include <string>
#include <vector>

#include "core/volume.h"
#include "generate/draws.h"

namespace stillfield::generate {

// What one file of images/ holds, and its truth. Labels are 1..classes by rising brightness.
struct Picture {
  std::string folder;  // "cast-iron"
  std::string name;    // without extension
  int classes = 0;
  int bits = 8;  // of a pixel value
  std::vector<Volume<std::uint16_t>> pages;
  std::vector<Volume<std::uint8_t>> truth;
};

// Smooth random surface: independent uniform values in [-1, 1] on a square lattice of `cell`
// pixels, joined by the cubic 3t^2 - 2t^3. The shape is a pure function of (key, x, y).
class SmoothField {
 public:
  SmoothField(std::uint64_t key, double cell) : key_(key), cell_(cell) {}
  double at(double x, double y) const;

 private:
  double corner(std::int64_t i, std::int64_t j) const;
  std::uint64_t key_;
  double cell_;
};

// Gaussian blur of standard deviation `sigma` pixels, mirrored at the border.
void blur(Volume<float>& plane, double sigma);

// Rounds to the nearest integer and clamps to 0..2^bits-1.
std::uint16_t quantised(double value, int bits);

std::vector<Picture> cast_iron_pictures(std::uint64_t seed);
std::vector<Picture> yeast_pictures(std::uint64_t seed);
Picture delivery_notes(std::uint64_t seed);

}  // namespace stillfield::generate

#endif  // STILLFIELD_TESTS_GENERATE_PICTURE_H_
