// Scenes of two and three classes under uneven light, for the studies and tests of shading.
//
//   kDisks, kBlobs  two classes of shapes.h
//   kThree          disks of a third class drawn over the blobs of the second
// Classes  at 100, 150, 200; with `dark` in falling order
// Light    slope     a plane along a slant
//          vignette  falls with the squared distance from a point off the centre
//          lamp      a Gaussian spot of about half the side, off the centre
//          Each is scaled so that the mean over the frame is one and the largest less the smallest
//          value is `span`: 0.3 is "30 % shading"
#ifndef STILLFIELD_TESTS_STUDY_LIT_SCENES_H_
#define STILLFIELD_TESTS_STUDY_LIT_SCENES_H_

#include <cstdint>

#include "core/volume.h"

namespace stillfield::study {

enum class LitScene { kDisks, kBlobs, kThree };
inline constexpr const char* kLitSceneNames[] = {"disks", "blobs", "three classes"};
enum class Light { kSlope, kVignette, kLamp };
inline constexpr const char* kLightNames[] = {"slope", "vignette", "lamp"};

// Labels 1..2 or 1..3 by rising grey value.
Volume<std::uint8_t> draw_lit_scene(LitScene scene, int side, bool dark, std::uint64_t seed);

Volume<double> draw_light(Light light, int side, double span, std::uint64_t seed);

// light * (50 + 50 label) + N(0, sd^2).
Volume<float> photograph_lit(const Volume<std::uint8_t>& labels, const Volume<double>& light,
                             double sd, std::uint64_t seed);

// Share of pixels whose label is wrong.
double misclassified(const Volume<std::uint8_t>& found, const Volume<std::uint8_t>& truth);

// Root mean square of found / mean(found) - truth over the frame.
double light_error(const Volume<float>& found, const Volume<double>& truth);

}  // namespace stillfield::study

#endif  // STILLFIELD_TESTS_STUDY_LIT_SCENES_H_
