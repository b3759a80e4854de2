#include "job/preview.h"

#include <algorithm>
#include <cmath>
#include <cstdint>

#include "image/write.h"

namespace stillfield {
namespace {

constexpr double kTail = 0.002;
constexpr std::int64_t kMostSamples = 1 << 20;

struct GreyRange {
  float black = 0, white = 1;
};

GreyRange grey_range(const std::vector<const Volume<float>*>& planes) {
  std::vector<float> sample;
  for (const Volume<float>* plane : planes) {
    const std::int64_t step = std::max<std::int64_t>(1, plane->extent().sites() / kMostSamples);
    std::int64_t number = 0;
    for (int y = 0; y < plane->height(); ++y) {
      for (int x = 0; x < plane->width(); ++x, ++number) {
        if (number % step == 0) sample.push_back(plane->at(x, y));
      }
    }
  }
  const auto quantile = [&sample](double share) {
    const auto at = static_cast<std::ptrdiff_t>(share * static_cast<double>(sample.size() - 1));
    std::nth_element(sample.begin(), sample.begin() + at, sample.end());
    return sample[static_cast<std::size_t>(at)];
  };
  const GreyRange range{quantile(kTail), quantile(1 - kTail)};
  return range.white > range.black ? range : GreyRange{range.black - 1, range.black + 1};
}

Volume<std::uint8_t> in_8_bits(const Volume<float>& plane, const GreyRange& range) {
  Volume<std::uint8_t> out(plane.extent());
  const float scale = 255.0F / (range.white - range.black);
  for (int y = 0; y < plane.height(); ++y) {
    for (int x = 0; x < plane.width(); ++x) {
      const float v = (plane.at(x, y) - range.black) * scale;
      out.at(x, y) = static_cast<std::uint8_t>(std::clamp(v + 0.5F, 0.0F, 255.0F));
    }
  }
  return out;
}

}  // namespace

void write_preview(const std::filesystem::path& file,
                   const std::vector<const Volume<float>*>& planes) {
  const GreyRange range = grey_range(planes);
  std::vector<Volume<std::uint8_t>> grey;
  for (const Volume<float>* plane : planes) grey.push_back(in_8_bits(*plane, range));
  if (grey.size() == 3) {
    write_png(file, {grey[0].view(), grey[1].view(), grey[2].view()});
  } else {
    write_png(file, grey.front().view());
  }
}

}  // namespace stillfield
