#include "image/pixel_size.h"

#include <cmath>
#include <cstdio>

namespace stillfield {
namespace {

constexpr double kSquare = 1e-4;

// Within a pixel an inch, since files hold rounded values (28 a centimetre, 2835 a metre).
bool is_screen_default(double per_inch) {
  return std::fabs(per_inch - 72) < 1 || std::fabs(per_inch - 96) < 1;
}

std::string short_number(double value) {
  char text[32];
  std::snprintf(text, sizeof text, "%.6g", value);
  return text;
}

}  // namespace

PixelSize square_pixel_size(double x_um, double y_um, PixelSizeSource source) {
  if (std::fabs(x_um - y_um) <= kSquare * x_um) return {x_um, source, {}};
  return {{},
          PixelSizeSource::kNotKnown,
          "pixels are not square (" + short_number(x_um) + " x " + short_number(y_um) +
              " um): lengths stay in pixels"};
}

PixelSize pixel_size_from_resolution(double x, double y, double um_per_unit) {
  const bool known = std::isfinite(x) && std::isfinite(y) && x > 0 && y > 0 && um_per_unit > 0;
  if (!known || x <= 1 || y <= 1) return {};
  const double x_um = um_per_unit / x;
  const double y_um = um_per_unit / y;
  if (is_screen_default(kUmPerInch / x_um) && is_screen_default(kUmPerInch / y_um)) {
    return {{},
            PixelSizeSource::kNotKnown,
            "a resolution of " + short_number(std::round(kUmPerInch / x_um)) +
                " pixels an inch is a screen's default and not taken for a pixel size"};
  }
  return square_pixel_size(x_um, y_um, PixelSizeSource::kResolution);
}

std::string name_of(PixelSizeSource source) {
  switch (source) {
    case PixelSizeSource::kOption:
      return "option";
    case PixelSizeSource::kOme:
      return "OME metadata";
    case PixelSizeSource::kResolution:
      return "resolution tags";
    case PixelSizeSource::kNotKnown:
      break;
  }
  return {};
}

}  // namespace stillfield
