// Two-class scenes that are not drawn from the label model, with their true labels.
//
//   disks     radii 3..14 px, overlaps allowed, 8 to 17 to a 128^2 field
//   blobs     Gaussian-smoothed white noise (sd 2.5 to 4 px) above its 65 to 80 % quantile
//   lines     straight strokes 3 to 5 px wide and 20 to 60 px long, 6 to 13 to a 128^2 field
//   polygons  Voronoi cells of about 17 px, shrunk by a gap of 3 to 5 px, each kept with
//             probability .4
// Blur     a Gaussian of sd `blur` px on the clean scene, before the noise
#ifndef STILLFIELD_TESTS_STUDY_SHAPES_H_
#define STILLFIELD_TESTS_STUDY_SHAPES_H_

#include <cstdint>

#include "core/volume.h"

namespace stillfield::study {

enum class Family { kDisks, kBlobs, kLines, kPolygons };
inline constexpr const char* kFamilyNames[] = {"disks", "blobs", "lines", "polygons"};

// Labels 1 (background) and 2.
Volume<std::uint8_t> draw_shapes(Family family, int side, std::uint64_t seed);

// Classes at grey values 0 and 1, blurred, plus N(0, sigma^2).
Volume<float> photograph(const Volume<std::uint8_t>& labels, double blur, double sigma,
                         std::uint64_t seed);

// Gaussian blur, mirrored at the frame.
Volume<double> gaussian_blur(const Volume<double>& image, double sd);

}  // namespace stillfield::study

#endif  // STILLFIELD_TESTS_STUDY_SHAPES_H_
