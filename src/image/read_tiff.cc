#include "image/read_tiff.h"

#include <algorithm>
#include <cmath>
#include <limits>
#include <utility>

#include "image/file_bytes.h"
#include "image/input_checks.h"
#include "image/luminance.h"
#include "image/tiff_handle.h"
#include "image/tiff_layout.h"
#include "image/tiff_pages.h"
#include "image/tiff_samples.h"

namespace stillfield {
namespace {

constexpr double kLargestExactInteger = 16777216;  // 2^24, for float
constexpr std::size_t kEveryPage = std::numeric_limits<std::size_t>::max();

// What stands for 1 of 255 in a colour map: 257 by the standard, 256 or 1 by some writers.
double palette_unit(const std::uint16_t* const table[3], std::size_t entries) {
  bool all_multiples = true;
  bool all_small = true;
  for (int c = 0; c < 3; ++c) {
    for (std::size_t i = 0; i < entries; ++i) {
      all_multiples &= table[c][i] % 256 == 0;
      all_small &= table[c][i] < 256;
    }
  }
  return all_small ? 1 : all_multiples ? 256 : 257;
}

TiffPagePlace go_to_page(const std::filesystem::path& file, int page, const ReadLimits& limits,
                         TiffHandle& tiff) {
  const auto pages =
      tiff_pages(file, tiff, limits, page < 0 ? kEveryPage : static_cast<std::size_t>(page) + 1);
  check_page(file, page, static_cast<int>(pages.size()));
  const TiffPagePlace& place = pages[static_cast<std::size_t>(page)];
  if (TIFFSetSubDirectory(tiff.get(), place.offset) != 1) {
    throw_input(file, "page " + std::to_string(page + 1) + " of the TIFF cannot be read (" +
                          tiff.first_error() + ")" + kCopyAgain);
  }
  return place;
}

// Turns the decoded rows of blocks into pixels of a field.
class PixelWriter {
 public:
  PixelWriter(TIFF* tiff, const TiffLayout& layout, Field& field) : layout_(layout), field_(field) {
    const auto width = static_cast<std::size_t>(layout.block_width);
    for (auto& samples : samples_) samples.resize(width);
    if (!layout.palette) return;
    std::uint16_t* table[3] = {};
    if (TIFFGetField(tiff, TIFFTAG_COLORMAP, &table[0], &table[1], &table[2]) != 1) return;
    const std::size_t entries = std::size_t{1} << layout.format.bits;
    const double unit = palette_unit(table, entries);
    for (std::size_t i = 0; i < entries; ++i) {
      palette_.push_back(luminance(table[0][i] / unit, table[1][i] / unit, table[2][i] / unit));
    }
  }

  bool has_palette() const { return !palette_.empty(); }
  bool rounded() const { return rounded_; }
  std::int64_t infinite() const { return infinite_; }

  // Row y of the image from column x0 on; planes[c] is the row of channel c, or planes[0] of all.
  void write_row(const std::byte* const planes[3], int x0, int y, int count) {
    const int used = layout_.colour ? 3 : 1;
    const auto step = static_cast<std::size_t>(layout_.samples_in_block());
    for (int c = 0; c < used; ++c) {
      const bool own_plane = layout_.separate;
      unpack_samples(planes[own_plane ? c : 0], layout_.format,
                     own_plane ? 0 : static_cast<std::size_t>(c), step,
                     static_cast<std::size_t>(count), samples_[c].data());
    }
    for (std::size_t c = 0; c < field_.colour.size(); ++c) {
      float* plane = field_.colour[c].row(y) + x0;
      for (int x = 0; x < count; ++x) {
        const auto value = static_cast<float>(samples_[c][static_cast<std::size_t>(x)]);
        plane[x] = std::isinf(value) ? std::numeric_limits<float>::quiet_NaN() : value;
      }
    }
    float* out = field_.pixels.row(y) + x0;
    for (int x = 0; x < count; ++x) out[x] = pixel(static_cast<std::size_t>(x));
  }

 private:
  float pixel(std::size_t x) {
    double value = samples_[0][x];
    if (layout_.colour) return finite(luminance(value, samples_[1][x], samples_[2][x]));
    if (layout_.palette) return palette_[static_cast<std::size_t>(value)];
    if (layout_.inverted) value = (1 << layout_.format.bits) - 1 - value;
    const bool integer = layout_.format.kind != SampleKind::kFloat;
    rounded_ |= integer && std::fabs(value) > kLargestExactInteger;
    return finite(static_cast<float>(value));
  }

  float finite(float value) {
    if (!std::isinf(value)) return value;
    ++infinite_;
    return std::numeric_limits<float>::quiet_NaN();
  }

  const TiffLayout& layout_;
  Field& field_;
  std::vector<double> samples_[3];
  std::vector<float> palette_;
  bool rounded_ = false;
  std::int64_t infinite_ = 0;
};

// Decodes strip or tile `block` into `buffer`, whose size is that of the decoded data.
void decode_block(const std::filesystem::path& file, TiffHandle& tiff, bool tiled,
                  std::uint32_t block, std::vector<std::byte>& buffer) {
  const auto size = static_cast<tmsize_t>(buffer.size());
  const tmsize_t got = tiled ? TIFFReadEncodedTile(tiff.get(), block, buffer.data(), size)
                             : TIFFReadEncodedStrip(tiff.get(), block, buffer.data(), size);
  if (got == size) return;
  const std::string& why = tiff.first_error();
  throw_input(file, "strip or tile " + std::to_string(block + 1) + " of the TIFF is damaged (" +
                        (why.empty() ? "too little data" : why) + ")" + kCopyAgain);
}

void read_pixels(const std::filesystem::path& file, TiffHandle& tiff, const TiffLayout& layout,
                 PixelWriter& writer) {
  const int planes = layout.separate && layout.colour ? 3 : 1;
  const auto across = (layout.width + layout.block_width - 1) / layout.block_width;
  const auto down = (layout.height + layout.block_height - 1) / layout.block_height;
  std::vector<std::byte> buffers[3];
  for (std::int64_t by = 0; by < down; ++by) {
    const std::int64_t y0 = by * layout.block_height;
    const std::int64_t rows = std::min(layout.block_height, layout.height - y0);
    const std::int64_t stored_rows = layout.tiled ? layout.block_height : rows;
    for (std::int64_t bx = 0; bx < across; ++bx) {
      for (int plane = 0; plane < planes; ++plane) {
        const auto block = static_cast<std::uint32_t>((plane * down + by) * across + bx);
        buffers[plane].resize(static_cast<std::size_t>(layout.row_bytes() * stored_rows));
        decode_block(file, tiff, layout.tiled, block, buffers[plane]);
      }
      const std::int64_t x0 = bx * layout.block_width;
      const auto count = static_cast<int>(std::min(layout.block_width, layout.width - x0));
      for (std::int64_t y = 0; y < rows; ++y) {
        const std::byte* row_planes[3] = {};
        for (int plane = 0; plane < planes; ++plane) {
          row_planes[plane] = buffers[plane].data() + y * layout.row_bytes();
        }
        writer.write_row(row_planes, static_cast<int>(x0), static_cast<int>(y0 + y), count);
      }
    }
  }
}

void add_notes(const TiffHandle& tiff, const TiffLayout& layout, const PixelWriter& writer,
               Field& field) {
  std::uint16_t orientation = ORIENTATION_TOPLEFT;
  TIFFGetField(tiff.get(), TIFFTAG_ORIENTATION, &orientation);
  if (layout.colour && field.colour.empty()) field.notes.emplace_back(kLuminanceNote);
  if (layout.palette) field.notes.emplace_back(kPaletteNote);
  if (layout.alpha) field.notes.emplace_back(kAlphaNote);
  if (layout.inverted) field.notes.emplace_back("zero is white in the file: values inverted");
  if (orientation != ORIENTATION_TOPLEFT) {
    field.notes.emplace_back("orientation tag not applied: rows are in stored order");
  }
  if (writer.rounded()) {
    field.notes.emplace_back("integers above 16777216 rounded to single precision");
  }
  if (writer.infinite() > 0) {
    field.notes.push_back(std::to_string(writer.infinite()) +
                          " infinite pixel(s) treated as missing");
  }
  if (!tiff.first_warning().empty()) {
    field.notes.push_back("the TIFF decoder warns: " + tiff.first_warning());
  }
}

// From OME metadata, else from the resolution tags.
void set_pixel_size(TIFF* tiff, Field& field) {
  PixelSize size;
  if (field.ome && field.ome->voxel.x_um && field.ome->voxel.y_um) {
    size = square_pixel_size(*field.ome->voxel.x_um, *field.ome->voxel.y_um, PixelSizeSource::kOme);
  } else {
    size = tiff_pixel_size(tiff);
  }
  field.pixel_size_um = size.um;
  field.pixel_size_source = size.source;
  if (!size.note.empty()) field.notes.push_back(size.note);
}

}  // namespace

int count_tiff_pages(const std::filesystem::path& file, const ReadLimits& limits) {
  TiffHandle tiff = TiffHandle::open(file);
  return static_cast<int>(tiff_pages(file, tiff, limits, kEveryPage).size());
}

std::vector<OmeImage> read_tiff_ome(const std::filesystem::path& file, const ReadLimits& limits) {
  TiffHandle tiff = TiffHandle::open(file);
  OmeFile ome = tiff_ome(file, tiff, limits);
  if (ome.images.empty()) return {};
  const auto pages = tiff_pages(file, tiff, limits, kEveryPage);
  std::vector<int> page_of_directory(static_cast<std::size_t>(pages.back().directory) + 1, -1);
  for (std::size_t i = 0; i < pages.size(); ++i) {
    page_of_directory[static_cast<std::size_t>(pages[i].directory)] = static_cast<int>(i);
  }
  for (OmeImage& image : ome.images) {
    std::erase_if(image.planes, [&](OmePlane& plane) {
      const auto directory = static_cast<std::size_t>(plane.page);
      plane.page = directory < page_of_directory.size() ? page_of_directory[directory] : -1;
      return plane.page < 0;
    });
  }
  return std::move(ome.images);
}

PageShape tiff_page_shape(const std::filesystem::path& file, int page, const ReadLimits& limits) {
  TiffHandle tiff = TiffHandle::open(file);
  go_to_page(file, page, limits, tiff);
  const TiffLayout layout = tiff_layout(file, tiff, limits);
  return {layout.width, layout.height, layout.colour ? 3 : 1, layout.format.bits};
}

Field read_tiff_page(const std::filesystem::path& file, int page, const ReadLimits& limits,
                     ColourMode colour) {
  TiffHandle tiff = TiffHandle::open(file);
  const OmeFile ome = tiff_ome(file, tiff, limits);
  const TiffPagePlace place = go_to_page(file, page, limits, tiff);
  const TiffLayout layout = tiff_layout(file, tiff, limits);
  tiff.forget_messages();

  Field field;
  field.pixels = Volume<float>({static_cast<int>(layout.width), static_cast<int>(layout.height)});
  const bool keep = layout.colour && colour == ColourMode::kSeparate;
  for (int c = 0; keep && c < 3; ++c) field.colour.emplace_back(field.pixels.extent());
  field.format = layout.format;
  field.channels_in_file = layout.channels;
  field.notes = ome.notes;
  field.ome = page_of(ome, place.directory);
  if (field.ome) field.ome->place.page = page;
  set_pixel_size(tiff.get(), field);
  PixelWriter writer(tiff.get(), layout, field);
  if (layout.palette) {
    if (!writer.has_palette()) {
      throw_input(file, std::string("the colour map of the TIFF is missing") + kCopyAgain);
    }
    field.format.bits = 8;
  }
  read_pixels(file, tiff, layout, writer);
  add_notes(tiff, layout, writer, field);
  return field;
}

}  // namespace stillfield
