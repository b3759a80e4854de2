// Writing results: TIFF for numbers, PNG for eyes. The same pixels give the same bytes.
//
// TIFF     deflate at a fixed level through zlib, little-endian, strips of about 256 KiB, no date;
//          predictor horizontal for 16 bits, none for 8 bits and floats (widely readable); BigTIFF
//          from 3.5 GB of pixels on; a view of depth > 1 becomes a page a plane; samples are
//          8-, 16- or 32-bit integers with or without sign, or 32-bit floats
// OME      names, sizes and order of the pages as OME-XML; all pages must be of one size then
// Errors   Error(kOutput), one sentence; nothing is left behind (see atomic_file.h)
#ifndef STILLFIELD_IMAGE_WRITE_H_
#define STILLFIELD_IMAGE_WRITE_H_

#include <cstddef>
#include <cstdint>
#include <filesystem>
#include <optional>
#include <string>
#include <utility>
#include <vector>

#include "core/volume.h"
#include "image/ome.h"

namespace stillfield {

struct TiffOptions {
  std::optional<double> pixel_size_um;  // goes to the resolution tags, in pixels a centimetre
  std::string description;              // ImageDescription of the first page; empty = no tag
  std::optional<OmeOutput> ome = {};    // takes the place of `description` as OME-XML
};

template <typename T>
struct TiffPage {
  TiffPage(View<const T> first, std::string page_name = {},
           std::vector<View<const T>> others = std::vector<View<const T>>())
      : pixels(first), name(std::move(page_name)), further(std::move(others)) {}

  View<const T> pixels;
  std::string name;  // tag PageName; empty = no tag
  // Green and blue where `pixels` is red: planes of the same size, stored pixel by pixel.
  std::vector<View<const T>> further;
};

template <typename T>
void write_tiff(const std::filesystem::path& path, const std::vector<TiffPage<T>>& pages,
                const TiffOptions& options = {});

// One page, or one a plane.
void write_tiff(const std::filesystem::path& path, View<const std::uint8_t> image,
                const TiffOptions& options = {});
void write_tiff(const std::filesystem::path& path, View<const std::uint16_t> image,
                const TiffOptions& options = {});
void write_tiff(const std::filesystem::path& path, View<const float> image,
                const TiffOptions& options = {});

// Three planes of equal size.
struct RgbView {
  View<const std::uint8_t> red;
  View<const std::uint8_t> green;
  View<const std::uint8_t> blue;
};

std::vector<std::byte> encode_png(View<const std::uint8_t> grey);
std::vector<std::byte> encode_png(const RgbView& colour);
void write_png(const std::filesystem::path& path, View<const std::uint8_t> grey);
void write_png(const std::filesystem::path& path, const RgbView& colour);

}  // namespace stillfield

#endif  // STILLFIELD_IMAGE_WRITE_H_
