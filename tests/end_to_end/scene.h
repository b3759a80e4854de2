// Small images for the end-to-end tests: disks of several grey values on a ground, with noise.
//
// Random numbers are Philox with integer rounding of the grey values: the same files everywhere.
#ifndef STILLFIELD_TESTS_END_TO_END_SCENE_H_
#define STILLFIELD_TESTS_END_TO_END_SCENE_H_

#include <cstdint>
#include <filesystem>

#include "core/volume.h"

namespace stillfield::test {

struct Scene {
  int width = 64;
  int height = 48;
  int classes = 3;
  std::uint32_t number = 1;  // different numbers, different images
  double darkest = 60;       // grey value of class 1
  double step = 60;          // to the next class
  double noise = 15;         // standard deviation
};

Volume<float> draw_scene(const Scene& scene);

void save_png(const std::filesystem::path& file, const Volume<float>& picture);     // 8 bits
void save_tiff16(const std::filesystem::path& file, const Volume<float>& picture);  // 16 bits
void save_tiff_float(const std::filesystem::path& file, const Volume<float>& picture);

}  // namespace stillfield::test

#endif  // STILLFIELD_TESTS_END_TO_END_SCENE_H_
