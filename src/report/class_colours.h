// Colours for label previews.
//
// Lightness rises with the class number, as the class means do, and the tint alternates between
// blue and orange, the pair that the common forms of colour blindness keep apart. Neighbouring
// classes differ in both, and a print in grey still shows the order.
// Input    1 <= label <= classes <= 64
#ifndef STILLFIELD_REPORT_CLASS_COLOURS_H_
#define STILLFIELD_REPORT_CLASS_COLOURS_H_

#include <cstdint>

namespace stillfield {

struct Rgb {
  std::uint8_t red = 0;
  std::uint8_t green = 0;
  std::uint8_t blue = 0;
};

Rgb class_colour(int label, int classes);

}  // namespace stillfield

#endif  // STILLFIELD_REPORT_CLASS_COLOURS_H_
