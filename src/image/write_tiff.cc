#include <algorithm>
#include <cstring>
#include <type_traits>

#include "core/error.h"
#include "image/atomic_file.h"
#include "image/tiff_handle.h"
#include "image/write.h"

namespace stillfield {
namespace {

// Level 1: level 6 took twice (float) to eight times (16 bits) as long for files 2-12 % smaller,
// measured on 2048 x 2048 pixels of smooth structure with noise.
constexpr int kDeflateLevel = 1;
constexpr std::int64_t kStripBytes = 256 << 10;
constexpr std::int64_t kBigTiffBytes = 3500000000;  // classic TIFF ends at 2^32

// None for floats: the floating-point predictor makes smaller files, but many readers lack it.
template <typename T>
int predictor() {
  return std::is_integral_v<T> && sizeof(T) > 1 ? PREDICTOR_HORIZONTAL : PREDICTOR_NONE;
}

[[noreturn]] void fail(const std::filesystem::path& path, const std::string& why) {
  throw Error(ErrorKind::kOutput, path.string() + ": writing the TIFF failed (" +
                                      (why.empty() ? "unknown reason" : why) +
                                      "); check the free space and the output folder");
}

void set_resolution(TIFF* tiff, double pixel_size_um) {
  const double per_centimetre = 10000.0 / pixel_size_um;
  TIFFSetField(tiff, TIFFTAG_XRESOLUTION, per_centimetre);
  TIFFSetField(tiff, TIFFTAG_YRESOLUTION, per_centimetre);
  TIFFSetField(tiff, TIFFTAG_RESOLUTIONUNIT, RESUNIT_CENTIMETER);
}

template <typename T>
void set_tags(TIFF* tiff, const TiffPage<T>& page, std::uint32_t rows_per_strip) {
  const View<const T>& plane = page.pixels;
  TIFFSetField(tiff, TIFFTAG_IMAGEWIDTH, static_cast<std::uint32_t>(plane.width()));
  TIFFSetField(tiff, TIFFTAG_IMAGELENGTH, static_cast<std::uint32_t>(plane.height()));
  TIFFSetField(tiff, TIFFTAG_BITSPERSAMPLE, static_cast<int>(8 * sizeof(T)));
  TIFFSetField(tiff, TIFFTAG_SAMPLESPERPIXEL, static_cast<int>(1 + page.further.size()));
  TIFFSetField(tiff, TIFFTAG_SAMPLEFORMAT,
               std::is_floating_point_v<T> ? SAMPLEFORMAT_IEEEFP
               : std::is_signed_v<T>       ? SAMPLEFORMAT_INT
                                           : SAMPLEFORMAT_UINT);
  TIFFSetField(tiff, TIFFTAG_PHOTOMETRIC,
               page.further.empty() ? PHOTOMETRIC_MINISBLACK : PHOTOMETRIC_RGB);
  TIFFSetField(tiff, TIFFTAG_PLANARCONFIG, PLANARCONFIG_CONTIG);
  TIFFSetField(tiff, TIFFTAG_ROWSPERSTRIP, rows_per_strip);
  TIFFSetField(tiff, TIFFTAG_COMPRESSION, COMPRESSION_ADOBE_DEFLATE);
  TIFFSetField(tiff, TIFFTAG_PREDICTOR, predictor<T>());
  TIFFSetField(tiff, TIFFTAG_ZIPQUALITY, kDeflateLevel);
  TIFFSetField(tiff, TIFFTAG_DEFLATE_SUBCODEC, DEFLATE_SUBCODEC_ZLIB);
  TIFFSetField(tiff, TIFFTAG_SOFTWARE, "stillfield");
}

template <typename T>
std::int64_t bytes_a_pixel(const TiffPage<T>& page) {
  return static_cast<std::int64_t>(sizeof(T) * (1 + page.further.size()));
}

// One row of all channels.
template <typename T>
void copy_row(const TiffPage<T>& page, int y, int z, T* out) {
  const T* row = page.pixels.row(y, z);
  const auto width = static_cast<std::size_t>(page.pixels.width());
  if (page.further.empty()) {
    std::memcpy(out, row, width * sizeof(T));
    return;
  }
  const std::size_t channels = 1 + page.further.size();
  for (std::size_t x = 0; x < width; ++x) out[x * channels] = row[x];
  for (std::size_t c = 1; c < channels; ++c) {
    const T* plane = page.further[c - 1].row(y, z);
    for (std::size_t x = 0; x < width; ++x) out[x * channels + c] = plane[x];
  }
}

// Plane z of the page as the current directory, whose tags are set.
template <typename T>
bool write_strips(TIFF* tiff, const TiffPage<T>& page, int z, int rows_per_strip) {
  const View<const T>& view = page.pixels;
  const auto width = static_cast<std::size_t>(view.width()) * (1 + page.further.size());
  std::vector<T> strip(width * static_cast<std::size_t>(rows_per_strip));
  std::uint32_t index = 0;
  for (int y0 = 0; y0 < view.height(); y0 += rows_per_strip, ++index) {
    const int rows = std::min(rows_per_strip, view.height() - y0);
    for (int y = 0; y < rows; ++y) {
      copy_row(page, y0 + y, z, strip.data() + width * static_cast<std::size_t>(y));
    }
    const auto size = static_cast<tmsize_t>(width * static_cast<std::size_t>(rows) * sizeof(T));
    if (TIFFWriteEncodedStrip(tiff, index, strip.data(), size) != size) return false;
  }
  return TIFFWriteDirectory(tiff) == 1;
}

// The name of the sample type in the OME schema.
template <typename T>
std::string ome_type() {
  if (std::is_floating_point_v<T>) return "float";
  return (std::is_signed_v<T> ? "int" : "uint") + std::to_string(8 * sizeof(T));
}

template <typename T>
std::string description_of(const std::filesystem::path& path, const std::vector<TiffPage<T>>& pages,
                           const TiffOptions& options) {
  if (!options.ome) return options.description;
  const TiffPage<T>& first = pages.front();
  const Extent extent = first.pixels.extent();
  OmePixels pixels{ome_type<T>(),
                   extent.width,
                   extent.height,
                   extent.depth,
                   static_cast<int>(1 + first.further.size()),
                   {}};
  for (const auto& page : pages) {
    if (page.pixels.extent() != extent) fail(path, "its pages differ in size");
    pixels.pages.push_back(page.name);
  }
  return ome_xml(*options.ome, pixels);
}

template <typename T>
void write_pages(const std::filesystem::path& path, const std::vector<TiffPage<T>>& pages,
                 const TiffOptions& options) {
  std::int64_t total_bytes = 0;
  int total_pages = 0;
  for (const auto& page : pages) {
    total_bytes += page.pixels.extent().sites() * bytes_a_pixel(page);
    total_pages += page.pixels.depth();
    if (page.pixels.extent().sites() == 0) fail(path, "a page has no pixels");
  }
  if (total_pages == 0) fail(path, "there is no page to write");

  const std::string description = description_of(path, pages, options);
  AtomicFile file(path);
  TiffHandle tiff = TiffHandle::create(file.descriptor(), path, total_bytes > kBigTiffBytes);
  int number = 0;
  for (const auto& page : pages) {
    const std::int64_t row_bytes = page.pixels.width() * bytes_a_pixel(page);
    const auto rows = static_cast<int>(
        std::clamp<std::int64_t>(kStripBytes / row_bytes, 1, page.pixels.height()));
    for (int z = 0; z < page.pixels.depth(); ++z, ++number) {
      set_tags(tiff.get(), page, static_cast<std::uint32_t>(rows));
      if (options.pixel_size_um) set_resolution(tiff.get(), *options.pixel_size_um);
      if (number == 0 && !description.empty()) {
        TIFFSetField(tiff.get(), TIFFTAG_IMAGEDESCRIPTION, description.c_str());
      }
      if (!page.name.empty()) TIFFSetField(tiff.get(), TIFFTAG_PAGENAME, page.name.c_str());
      if (total_pages > 1) TIFFSetField(tiff.get(), TIFFTAG_SUBFILETYPE, FILETYPE_PAGE);
      if (!write_strips(tiff.get(), page, z, rows)) fail(path, tiff.first_error());
    }
  }
  tiff.close();
  if (!tiff.first_error().empty()) fail(path, tiff.first_error());
  file.commit();
}

}  // namespace

template <typename T>
void write_tiff(const std::filesystem::path& path, const std::vector<TiffPage<T>>& pages,
                const TiffOptions& options) {
  write_pages(path, pages, options);
}

#define STILLFIELD_WRITES(T)                                                                 \
  template void write_tiff<T>(const std::filesystem::path&, const std::vector<TiffPage<T>>&, \
                              const TiffOptions&);
STILLFIELD_WRITES(std::uint8_t)
STILLFIELD_WRITES(std::uint16_t)
STILLFIELD_WRITES(std::uint32_t)
STILLFIELD_WRITES(std::int8_t)
STILLFIELD_WRITES(std::int16_t)
STILLFIELD_WRITES(std::int32_t)
STILLFIELD_WRITES(float)
#undef STILLFIELD_WRITES

void write_tiff(const std::filesystem::path& path, View<const std::uint8_t> image,
                const TiffOptions& options) {
  write_pages<std::uint8_t>(path, {{image}}, options);
}

void write_tiff(const std::filesystem::path& path, View<const std::uint16_t> image,
                const TiffOptions& options) {
  write_pages<std::uint16_t>(path, {{image}}, options);
}

void write_tiff(const std::filesystem::path& path, View<const float> image,
                const TiffOptions& options) {
  write_pages<float>(path, {{image}}, options);
}

}  // namespace stillfield
