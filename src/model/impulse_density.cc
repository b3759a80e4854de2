#include "model/impulse_density.h"

#include <algorithm>

#include "core/error.h"

namespace stillfield {

ImpulseDensity::ImpulseDensity(View<const float> image, View<const std::uint8_t> usable,
                               const ImpulseMap& map) {
  const Extent e = image.extent();
  bool any = false;
  const auto for_usable = [&](const auto& body) {
    for (int z = 0; z < e.depth; ++z) {
      for (int y = 0; y < e.height; ++y) {
        for (int x = 0; x < e.width; ++x) {
          if (usable.at(x, y, z) != 0) body(image.at(x, y, z), map.value.at(x, y, z));
        }
      }
    }
  };
  for_usable([&](float v, float) {
    low_ = any ? std::min<double>(low_, v) : v;
    high_ = any ? std::max<double>(high_, v) : v;
    any = true;
  });
  if (!any) throw Error(ErrorKind::kInput, "no pixel of the image is usable");
  if (!(high_ > low_)) high_ = low_ + 1.0;
  std::array<double, kBins> weight{};
  double total = 0.0;
  for_usable([&](float v, float p) {
    const int bin = static_cast<int>((v - low_) / (high_ - low_) * kBins);
    weight[static_cast<std::size_t>(std::min(bin, kBins - 1))] += p;
    total += p;
  });
  const double width = (high_ - low_) / kBins;
  for (std::size_t b = 0; b < density_.size(); ++b) {
    const double found = total > 0.0 ? weight[b] / total : 1.0 / kBins;
    density_[b] = (0.5 / kBins + 0.5 * found) / width;
  }
}

double ImpulseDensity::operator()(double y) const {
  if (!(y >= low_ && y <= high_)) return 0.0;
  const int bin = static_cast<int>((y - low_) / (high_ - low_) * kBins);
  return density_[static_cast<std::size_t>(std::min(bin, kBins - 1))];
}

}  // namespace stillfield
