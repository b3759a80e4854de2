// Luminance of a colour pixel: 0.299 R + 0.587 G + 0.114 B.
//
// Source   Recommendation ITU-R BT.601-7, section 2.5.1 (luma of gamma-corrected components)
// Order    red, green, blue in double, then one rounding to float: the same on every CPU
#ifndef STILLFIELD_IMAGE_LUMINANCE_H_
#define STILLFIELD_IMAGE_LUMINANCE_H_

namespace stillfield {

inline float luminance(double red, double green, double blue) {
  return static_cast<float>(0.299 * red + 0.587 * green + 0.114 * blue);
}

inline constexpr char kLuminanceNote[] = "3 colour channels converted to luminance";
inline constexpr char kPaletteNote[] = "colour palette converted to luminance";
inline constexpr char kAlphaNote[] = "alpha channel ignored";

}  // namespace stillfield

#endif  // STILLFIELD_IMAGE_LUMINANCE_H_
