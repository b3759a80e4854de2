#include "report/class_colours.h"

#include <catch2/catch.hpp>

using namespace stillfield;

namespace {

// Recommendation ITU-R BT.601-7, section 2.5.1.
double lightness(const Rgb& c) {
  return 0.299 * c.red + 0.587 * c.green + 0.114 * c.blue;
}

// Confusion lines of protanopes and deuteranopes run from red to green; what is left to them is
// blue against yellow.
int blue_minus_yellow(const Rgb& c) {
  return c.blue - (c.red + c.green) / 2;
}

}  // namespace

TEST_CASE("lightness rises with the class and neighbouring classes differ in tint") {
  for (int classes = 2; classes <= 64; ++classes) {
    CAPTURE(classes);
    for (int k = 1; k < classes; ++k) {
      const Rgb a = class_colour(k, classes);
      const Rgb b = class_colour(k + 1, classes);
      CAPTURE(k);
      // From 40 to 215 in equal steps, up to what clamping at 0 and 255 and rounding take away.
      if (classes <= 8) CHECK(lightness(b) - lightness(a) >= 15);
      CHECK(lightness(class_colour(classes, classes)) - lightness(class_colour(1, classes)) > 165);
      const int tint = blue_minus_yellow(a) - blue_minus_yellow(b);
      CHECK((k % 2 == 1 ? tint : -tint) >= 90);
    }
  }
}
