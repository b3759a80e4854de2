#include "image/tiff_samples.h"

#include <cstdint>
#include <cstring>

namespace stillfield {
namespace {

template <typename T>
void unpack(const std::byte* row, std::size_t first, std::size_t step, std::size_t count,
            double* out) {
  for (std::size_t i = 0; i < count; ++i) {
    T value;
    std::memcpy(&value, row + (first + i * step) * sizeof(T), sizeof(T));
    out[i] = static_cast<double>(value);
  }
}

void unpack_bits(const std::byte* row, std::size_t bits, std::size_t first, std::size_t step,
                 std::size_t count, double* out) {
  for (std::size_t i = 0; i < count; ++i) {
    const std::size_t start = (first + i * step) * bits;
    unsigned value = 0;
    for (std::size_t at = start; at < start + bits; ++at) {
      value = value << 1 | (std::to_integer<unsigned>(row[at / 8]) >> (7 - at % 8) & 1u);
    }
    out[i] = value;
  }
}

}  // namespace

void unpack_samples(const std::byte* row, SampleFormat format, std::size_t first, std::size_t step,
                    std::size_t count, double* out) {
  const int bits = format.bits;
  switch (format.kind) {
    case SampleKind::kFloat:
      return bits == 32 ? unpack<float>(row, first, step, count, out)
                        : unpack<double>(row, first, step, count, out);
    case SampleKind::kSigned:
      return bits == 8    ? unpack<std::int8_t>(row, first, step, count, out)
             : bits == 16 ? unpack<std::int16_t>(row, first, step, count, out)
                          : unpack<std::int32_t>(row, first, step, count, out);
    case SampleKind::kUnsigned:
      return bits == 8    ? unpack<std::uint8_t>(row, first, step, count, out)
             : bits == 16 ? unpack<std::uint16_t>(row, first, step, count, out)
             : bits == 32
                 ? unpack<std::uint32_t>(row, first, step, count, out)
                 : unpack_bits(row, static_cast<std::size_t>(bits), first, step, count, out);
  }
}

}  // namespace stillfield
