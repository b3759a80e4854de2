// The side of a pixel, and where it is known from.
//
// Sources, best first: the --pixel-size option, OME metadata, resolution tags (pixels a centimetre
// or inch in TIFF, a metre in PNG and BMP, either in JPEG). Rule     a resolution of 72 or 96
// pixels an inch is what programs write that know nothing (screens
//          have had both), and one of 1 a unit or less is a placeholder: neither is taken for a
//          pixel size. Common practice, no source. Every other resolution counts: scanners write
//          true ones.
#ifndef STILLFIELD_IMAGE_PIXEL_SIZE_H_
#define STILLFIELD_IMAGE_PIXEL_SIZE_H_

#include <optional>
#include <string>

namespace stillfield {

inline constexpr double kUmPerInch = 25400;
inline constexpr double kUmPerCentimetre = 1e4;
inline constexpr double kUmPerMetre = 1e6;

enum class PixelSizeSource { kNotKnown, kOption, kOme, kResolution };

struct PixelSize {
  std::optional<double> um;  // side of a square pixel in micrometres
  PixelSizeSource source = PixelSizeSource::kNotKnown;
  std::string note;  // why there is none although the file says something; may be empty
};

// `x` and `y` pixels lie on a unit of `um_per_unit` micrometres. 0 and numbers that are not finite
// say nothing.
PixelSize pixel_size_from_resolution(double x, double y, double um_per_unit);

// Sides in micrometres; kept only if they are equal to 1 part in 10^4.
PixelSize square_pixel_size(double x_um, double y_um, PixelSizeSource source);

// "option", "OME metadata", "resolution tags"; "" if unknown.
std::string name_of(PixelSizeSource source);

}  // namespace stillfield

#endif  // STILLFIELD_IMAGE_PIXEL_SIZE_H_
