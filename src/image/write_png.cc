#include <opencv2/imgcodecs.hpp>
#include <stdexcept>

#include "core/error.h"
#include "image/atomic_file.h"
#include "image/write.h"

namespace stillfield {
namespace {

std::vector<std::byte> encode(const cv::Mat& mat) {
  const std::vector<int> settings = {cv::IMWRITE_PNG_COMPRESSION, 6, cv::IMWRITE_PNG_STRATEGY,
                                     cv::IMWRITE_PNG_STRATEGY_FILTERED};
  std::vector<unsigned char> bytes;
  if (mat.empty() || !cv::imencode(".png", mat, bytes, settings)) {
    throw Error(ErrorKind::kOutput, "a preview of " + std::to_string(mat.cols) + " x " +
                                        std::to_string(mat.rows) +
                                        " pixels cannot be encoded as PNG; make it smaller");
  }
  const auto* first = reinterpret_cast<const std::byte*>(bytes.data());
  return {first, first + bytes.size()};
}

}  // namespace

std::vector<std::byte> encode_png(View<const std::uint8_t> grey) {
  cv::Mat mat(grey.height(), grey.width(), CV_8UC1);
  for (int y = 0; y < grey.height(); ++y) {
    std::copy_n(grey.row(y), grey.width(), mat.ptr<std::uint8_t>(y));
  }
  return encode(mat);
}

std::vector<std::byte> encode_png(const RgbView& colour) {
  const auto& [red, green, blue] = colour;
  if (red.extent() != green.extent() || red.extent() != blue.extent()) {
    throw std::invalid_argument("encode_png: planes differ in size");
  }
  cv::Mat mat(red.height(), red.width(), CV_8UC3);
  for (int y = 0; y < red.height(); ++y) {
    auto* out = mat.ptr<std::uint8_t>(y);
    for (int x = 0; x < red.width(); ++x) {
      *out++ = blue.row(y)[x];  // OpenCV's order
      *out++ = green.row(y)[x];
      *out++ = red.row(y)[x];
    }
  }
  return encode(mat);
}

void write_png(const std::filesystem::path& path, View<const std::uint8_t> grey) {
  write_bytes_atomically(path, encode_png(grey));
}

void write_png(const std::filesystem::path& path, const RgbView& colour) {
  write_bytes_atomically(path, encode_png(colour));
}

}  // namespace stillfield
