// Rows of decoded TIFF samples as numbers.
#ifndef STILLFIELD_IMAGE_TIFF_SAMPLES_H_
#define STILLFIELD_IMAGE_TIFF_SAMPLES_H_

#include <cstddef>

#include "image/field.h"

namespace stillfield {

// out[i] = sample number first + i * step of the row at `row`, for 0 <= i < count. Samples of
// other widths than 8, 16, 32 and 64 bits are packed from the high bit of each byte down
// (FillOrder 1; libtiff has turned the other order round already).
void unpack_samples(const std::byte* row, SampleFormat format, std::size_t first, std::size_t step,
                    std::size_t count, double* out);

}  // namespace stillfield

#endif  // STILLFIELD_IMAGE_TIFF_SAMPLES_H_
