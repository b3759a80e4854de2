#include "image/read_opencv.h"

#include <algorithm>
#include <opencv2/core/utils/logger.hpp>
#include <opencv2/imgcodecs.hpp>

#include "image/decode_jpeg.h"
#include "image/luminance.h"
#include "image/raster_header.h"

namespace stillfield {
namespace {

constexpr std::int64_t kMaxPixels = std::int64_t{1} << 30;  // OpenCV's own limit

RasterHeader check(const std::filesystem::path& file, FileType type, const ReadLimits& limits,
                   std::vector<std::byte>& bytes) {
  if (type == FileType::kJpeg) return check_jpeg(file, bytes, limits);
  if (type == FileType::kBmp) return check_bmp(file, bytes, limits);
  std::vector<std::byte> plain;
  const auto header = type == FileType::kPng ? check_png(file, bytes, limits, plain)
                                             : check_pnm(file, bytes, limits, plain);
  bytes.swap(plain);
  return header;
}

// The colours of an OS/2 bitmap come as rounded grey unless colour is asked for (OpenCV 4.6).
int decoding_of(FileType type, const RasterHeader& header) {
  return type == FileType::kBmp && !header.palette ? cv::IMREAD_COLOR : cv::IMREAD_UNCHANGED;
}

cv::Mat decode(const std::filesystem::path& file, std::vector<std::byte>& bytes, int decoding) {
  static const auto silenced =
      cv::utils::logging::setLogLevel(cv::utils::logging::LOG_LEVEL_SILENT);
  static_cast<void>(silenced);
  cv::Mat mat;
  try {
    const cv::Mat buffer(1, static_cast<int>(bytes.size()), CV_8UC1, bytes.data());
    mat = cv::imdecode(buffer, decoding);
  } catch (const cv::Exception&) {
    mat.release();
  }
  if (mat.empty()) {
    throw_input(file,
                std::string("the picture data are damaged and cannot be decoded") + kCopyAgain);
  }
  return mat;
}

template <typename T>
void copy_row(const cv::Mat& mat, int y, int spread, float* out) {
  const T* in = mat.ptr<T>(y);
  const int channels = mat.channels();
  for (int x = 0; x < mat.cols; ++x, in += channels) {
    out[x] = channels == 1 ? static_cast<float>(in[0] / spread) : luminance(in[2], in[1], in[0]);
  }
}

template <typename T>
void copy_colours(const cv::Mat& mat, int y, std::vector<Volume<float>>& planes) {
  const T* in = mat.ptr<T>(y);
  for (int x = 0; x < mat.cols; ++x, in += mat.channels()) {
    for (int c = 0; c < 3; ++c) {
      planes[static_cast<std::size_t>(c)].at(x, y) = in[2 - c];  // stored blue first
    }
  }
}

}  // namespace

Field read_opencv(const std::filesystem::path& file, FileType type, const ReadLimits& limits,
                  ColourMode colour) {
  std::vector<std::byte> bytes = read_whole(file);
  const ReadLimits tighter{std::min(limits.max_pixels, kMaxPixels)};
  const RasterHeader header = check(file, type, tighter, bytes);
  Field field;
  const cv::Mat mat = type == FileType::kJpeg ? decode_jpeg(file, bytes, header, field.notes)
                                              : decode(file, bytes, decoding_of(type, header));
  const bool known_layout = (mat.depth() == CV_8U || mat.depth() == CV_16U) &&
                            (mat.channels() == 1 || mat.channels() >= 3);
  if (mat.cols != header.width || mat.rows != header.height || !known_layout) {
    throw_input(file, std::string("the picture is not what its header claims") + kCopyAgain);
  }

  field.pixels = Volume<float>({mat.cols, mat.rows});
  field.format = {SampleKind::kUnsigned, header.palette ? 8 : header.bits};
  const bool colour_palette = header.palette && mat.channels() >= 3;
  field.channels_in_file = header.channels;
  if (colour_palette) field.notes.emplace_back(kPaletteNote);
  const bool in_colour = !header.palette && header.channels >= 3 && mat.channels() >= 3;
  const bool keep = colour == ColourMode::kSeparate && in_colour;
  for (int c = 0; keep && c < 3; ++c) field.colour.emplace_back(field.pixels.extent());
  if (!keep && in_colour) field.notes.emplace_back(kLuminanceNote);
  if (header.alpha) field.notes.emplace_back(kAlphaNote);
  field.pixel_size_um = header.pixel_size.um;
  field.pixel_size_source = header.pixel_size.source;
  if (!header.pixel_size.note.empty()) field.notes.push_back(header.pixel_size.note);
  for (int y = 0; y < mat.rows; ++y) {
    if (mat.depth() == CV_8U) {
      copy_row<std::uint8_t>(mat, y, header.spread, field.pixels.row(y));
      if (keep) copy_colours<std::uint8_t>(mat, y, field.colour);
    } else {
      copy_row<std::uint16_t>(mat, y, header.spread, field.pixels.row(y));
      if (keep) copy_colours<std::uint16_t>(mat, y, field.colour);
    }
  }
  return field;
}

}  // namespace stillfield
