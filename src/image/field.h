// One page of an image file as the samplers see it: a plane of floats and where it came from.
#ifndef STILLFIELD_IMAGE_FIELD_H_
#define STILLFIELD_IMAGE_FIELD_H_

#include <optional>
#include <string>
#include <vector>

#include "core/volume.h"
#include "image/ome.h"
#include "image/pixel_size.h"

namespace stillfield {

enum class SampleKind { kUnsigned, kSigned, kFloat };

// How a sample is stored in the file. Unsigned samples lie in 0 .. 2^bits - 1.
struct SampleFormat {
  SampleKind kind = SampleKind::kUnsigned;
  int bits = 8;

  bool operator==(const SampleFormat&) const = default;
};

// What becomes of red, green and blue: their luminance alone, or the planes as well.
enum class ColourMode { kLuminance, kSeparate };

// Pixels keep the numbers of the file: nothing is rescaled. Integers of up to 24 bits are exact.
struct Field {
  Volume<float> pixels;               // depth 1; NaN = missing
  std::vector<Volume<float>> colour;  // red, green, blue if asked for and there; else empty
  SampleFormat format;
  int channels_in_file = 1;
  std::optional<double> pixel_size_um;  // side of a square pixel in micrometres
  PixelSizeSource pixel_size_source = PixelSizeSource::kNotKnown;
  std::optional<OmePage> ome;      // what OME metadata say about the page
  std::vector<std::string> notes;  // what a reader of the results should know
};

}  // namespace stillfield

#endif  // STILLFIELD_IMAGE_FIELD_H_
