#include "bench/bounds.h"

#include <algorithm>
#include <cstring>

#include "simd/random_rows.h"

namespace stillfield::bench {
namespace {

constexpr int kColumns = 1536;

void read_all(const AlignedBuffer<float>& buffer) {
  // Integer sums of four independent streams: no chain of slow additions.
  std::uint64_t sum[4] = {};
  const auto* p = reinterpret_cast<const unsigned char*>(buffer.data());
  const std::size_t words = buffer.size() * sizeof(float) / 32;
  for (std::size_t i = 0; i < words; ++i) {
    std::uint64_t w[4];
    std::memcpy(w, p + 32 * i, 32);
    for (int j = 0; j < 4; ++j) sum[j] += w[j];
  }
  volatile std::uint64_t keep = sum[0] ^ sum[1] ^ sum[2] ^ sum[3];
  (void)keep;
}

void read_and_write_all(AlignedBuffer<std::uint8_t>& buffer) {
  static volatile std::uint8_t zero = 0;
  const std::uint8_t add = zero;  // unknown to the compiler: the bytes are really stored
  std::uint8_t* p = buffer.data();
  const std::size_t n = buffer.size();
  for (std::size_t i = 0; i < n; ++i) p[i] = static_cast<std::uint8_t>(p[i] + add);
}

}  // namespace

void draw_random_words(const Colouring& c, std::uint32_t sweep) {
  alignas(64) static std::uint32_t even[kColumns], odd[kColumns];
  for (int colour = 0; colour < c.colours(); ++colour) {
    RandomPlane plane{{1, 2}, sweep, counter_word3(Purpose::kLabels, colour, 0), 0, 0};
    const int columns = std::max(c.sites(colour, 0, 0), c.sites(colour, 0, 1));
    for (int pair = 0; pair < (c.rows(colour) + 1) / 2; ++pair) {
      for (int first = 0; first < columns; first += kColumns) {
        plane.first_column = static_cast<std::uint32_t>(first);
        random_row_pair(plane, static_cast<std::uint32_t>(pair),
                        std::min(kColumns, columns - first), even, odd);
      }
    }
  }
}

void stream_memory(Field& field, bool counting) {
  read_all(field.weights.value);
  read_and_write_all(field.chain.labels);
  if (counting) read_and_write_all(field.visits);
}

}  // namespace stillfield::bench
