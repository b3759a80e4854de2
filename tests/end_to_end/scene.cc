#include "end_to_end/scene.h"

#include <algorithm>
#include <cmath>

#include "image/write.h"
#include "random/stream.h"

namespace stillfield::test {
namespace {

template <typename T>
Volume<T> rounded(const Volume<float>& picture, float highest) {
  Volume<T> result(picture.extent());
  for (int y = 0; y < picture.height(); ++y) {
    for (int x = 0; x < picture.width(); ++x) {
      result.at(x, y) = static_cast<T>(std::clamp(std::nearbyint(picture.at(x, y)), 0.0F, highest));
    }
  }
  return result;
}

}  // namespace

Volume<float> draw_scene(const Scene& scene) {
  RandomStream random({20261201, scene.number}, Purpose::kSimulation);
  Volume<std::uint8_t> label(Extent{scene.width, scene.height});
  const int disks = scene.classes < 2 ? 0 : std::max(2, scene.width * scene.height / 300);
  for (int d = 0; d < disks; ++d) {
    const double cx = random.uniform() * scene.width;
    const double cy = random.uniform() * scene.height;
    const double radius = 3 + 5 * random.uniform();
    const auto k = static_cast<std::uint8_t>(1 + d % (scene.classes - 1));
    for (int y = 0; y < scene.height; ++y) {
      for (int x = 0; x < scene.width; ++x) {
        const double dx = x - cx;
        const double dy = y - cy;
        if (dx * dx + dy * dy < radius * radius) label.at(x, y) = k;
      }
    }
  }
  Volume<float> picture(label.extent());
  for (int y = 0; y < scene.height; ++y) {
    for (int x = 0; x < scene.width; ++x) {
      const double grey = scene.darkest + scene.step * label.at(x, y);
      picture.at(x, y) = static_cast<float>(grey + scene.noise * random.normal());
    }
  }
  return picture;
}

void save_png(const std::filesystem::path& file, const Volume<float>& picture) {
  write_png(file, rounded<std::uint8_t>(picture, 255).view());
}

void save_tiff16(const std::filesystem::path& file, const Volume<float>& picture) {
  write_tiff(file, rounded<std::uint16_t>(picture, 65535).view());
}

void save_tiff_float(const std::filesystem::path& file, const Volume<float>& picture) {
  write_tiff(file, picture.view());
}

}  // namespace stillfield::test
