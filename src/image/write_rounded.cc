#include "image/write_rounded.h"

#include <algorithm>
#include <cmath>
#include <cstdint>

namespace stillfield {
namespace {

constexpr int kMostBits = 32;

struct Range {
  double lowest;
  double largest;
};

Range range_of(const SampleFormat& format) {
  if (format.kind == SampleKind::kSigned) {
    const double half = std::ldexp(1.0, format.bits - 1);
    return {-half, half - 1};
  }
  return {0, std::ldexp(1.0, format.bits) - 1};
}

template <class T>
void write_as(const std::filesystem::path& path, const std::vector<View<const float>>& channels,
              const Range& range, const TiffOptions& options) {
  std::vector<Volume<T>> planes;
  for (const View<const float>& channel : channels) {
    Volume<T>& plane = planes.emplace_back(channel.extent());
    for (int y = 0; y < channel.height(); ++y) {
      for (int x = 0; x < channel.width(); ++x) {
        const double value = std::isnan(channel.at(x, y)) ? 0 : double{channel.at(x, y)};
        plane.at(x, y) =
            static_cast<T>(std::clamp(std::floor(value + 0.5), range.lowest, range.largest));
      }
    }
  }
  TiffPage<T> page(planes.front().view());
  for (std::size_t c = 1; c < planes.size(); ++c) page.further.push_back(planes[c].view());
  write_tiff(path, std::vector<TiffPage<T>>{page}, options);
}

}  // namespace

bool keeps_integers(const SampleFormat& format) {
  return format.kind != SampleKind::kFloat && format.bits <= kMostBits;
}

void write_rounded_tiff(const std::filesystem::path& path,
                        const std::vector<View<const float>>& channels, const SampleFormat& format,
                        const TiffOptions& options) {
  const Range range = range_of(format);
  if (format.kind == SampleKind::kSigned) {
    if (format.bits <= 8) return write_as<std::int8_t>(path, channels, range, options);
    if (format.bits <= 16) return write_as<std::int16_t>(path, channels, range, options);
    return write_as<std::int32_t>(path, channels, range, options);
  }
  if (format.bits <= 8) return write_as<std::uint8_t>(path, channels, range, options);
  if (format.bits <= 16) return write_as<std::uint16_t>(path, channels, range, options);
  return write_as<std::uint32_t>(path, channels, range, options);
}

}  // namespace stillfield
