// Files written by an independent writer (OpenCV's encoders) or by hand are read to the numbers
// that went in.
#include <catch2/catch.hpp>
#include <opencv2/imgcodecs.hpp>

#include "image/luminance.h"
#include "image/read.h"
#include "patterns.h"
#include "temp_folder.h"

using namespace stillfield;
using namespace stillfield::test;
using namespace std::string_literals;

namespace {

template <typename T>
cv::Mat picture(int width, int height, int channels, std::uint32_t largest) {
  cv::Mat mat(height, width, CV_MAKETYPE(cv::DataType<T>::depth, channels));
  for (int y = 0; y < height; ++y) {
    for (int x = 0; x < width; ++x) {
      for (int c = 0; c < channels; ++c) {
        mat.ptr<T>(y)[x * channels + c] = static_cast<T>(pattern(x, y, c, largest));
      }
    }
  }
  return mat;
}

void check_grey(const Field& field, int width, int height, int bits, std::uint32_t largest) {
  REQUIRE(field.pixels.extent() == Extent{width, height, 1});
  CHECK(field.format == SampleFormat{SampleKind::kUnsigned, bits});
  CHECK(field.channels_in_file == 1);
  CHECK(field.notes.empty());
  int wrong = 0;
  for (int y = 0; y < height; ++y) {
    for (int x = 0; x < width; ++x) {
      wrong += field.pixels.at(x, y) != static_cast<float>(pattern(x, y, 0, largest));
    }
  }
  CHECK(wrong == 0);
}

std::string from_hex(const std::string& digits) {
  std::string bytes;
  for (std::size_t i = 0; i < digits.size(); i += 2) {
    bytes += static_cast<char>(std::stoi(digits.substr(i, 2), nullptr, 16));
  }
  return bytes;
}

std::vector<float> row_of(const Field& field) {
  return {field.pixels.row(0), field.pixels.row(0) + field.pixels.width()};
}

}  // namespace

TEST_CASE("8-bit grey PNG, BMP and PGM are read exactly") {
  const TempFolder folder;
  for (const std::string name : {"a.png", "a.bmp", "a.pgm"}) {
    CAPTURE(name);
    REQUIRE(cv::imwrite((folder / name).string(), picture<std::uint8_t>(37, 19, 1, 255)));
    check_grey(read_page(folder / name), 37, 19, 8, 255);
    CHECK(count_pages(folder / name) == 1);
  }
}

TEST_CASE("16-bit grey PNG, PGM and TIFF are read exactly") {
  const TempFolder folder;
  for (const std::string name : {"a.png", "a.pgm", "a.tif"}) {
    CAPTURE(name);
    REQUIRE(cv::imwrite((folder / name).string(), picture<std::uint16_t>(41, 23, 1, 65535)));
    check_grey(read_page(folder / name), 41, 23, 16, 65535);
  }
}

TEST_CASE("text PGM is read exactly, also with a largest value below 255") {
  const TempFolder folder;
  const std::vector<int> plain = {cv::IMWRITE_PXM_BINARY, 0};
  REQUIRE(cv::imwrite((folder / "a.pgm").string(), picture<std::uint8_t>(9, 4, 1, 255), plain));
  check_grey(read_page(folder / "a.pgm"), 9, 4, 8, 255);

  put(folder / "b.pgm", "P2 # text\n3 1\n100 # largest\n1 50 # sample\n 100\n");
  const Field field = read_page(folder / "b.pgm");
  CHECK(row_of(field) == std::vector<float>{1, 50, 100});
  CHECK(field.format.bits == 7);

  put(folder / "c.pgm", "P5 2 1 4095\n\x01\x32\x0f\xff"s);
  CHECK(row_of(read_page(folder / "c.pgm")) == std::vector<float>{306, 4095});
  CHECK(read_page(folder / "c.pgm").format.bits == 12);
}

TEST_CASE("bitmaps come as 0 and 1 with 1 for light") {
  const TempFolder folder;
  put(folder / "text.pbm", "P1 4 1\n01 10\n");  // in PBM 1 is black, pbm(5)
  put(folder / "binary.pbm", "P4 4 1\n\x60"s);
  CHECK(row_of(read_page(folder / "text.pbm")) == std::vector<float>{1, 0, 0, 1});
  CHECK(row_of(read_page(folder / "binary.pbm")) == std::vector<float>{1, 0, 0, 1});

  put(folder / "grey.pgm", "P5 3 1 1\n\x01\0\x01"s);  // a PGM of two levels is no bitmap
  CHECK(row_of(read_page(folder / "grey.pgm")) == std::vector<float>{1, 0, 1});

  const std::vector<int> bilevel = {cv::IMWRITE_PNG_BILEVEL, 1};
  const cv::Mat mat = (cv::Mat_<std::uint8_t>(1, 5) << 0, 255, 255, 0, 255);
  REQUIRE(cv::imwrite((folder / "a.png").string(), mat, bilevel));
  const Field field = read_page(folder / "a.png");
  CHECK(row_of(field) == std::vector<float>{0, 1, 1, 0, 1});
  CHECK(field.format == SampleFormat{SampleKind::kUnsigned, 1});
}

TEST_CASE("PNG of 2 bits, with a palette, and grey with alpha, as Python's zlib packed them") {
  const TempFolder folder;
  put(folder / "two.png",
      from_hex(
          "89504e470d0a1a0a0000000d494844520000000400000001020000000096e748b00000000a4944415478"
          "9c63900600001d001c8ef4f5210000000049454e44ae426082"));
  put(folder / "palette.png",
      from_hex(
          "89504e470d0a1a0a0000000d49484452000000030000000108030000002c3ee48600000009504c544500"
          "0000c8c8c8ff0000aadc24070000000c49444154789c6360606402000008000436e0b0a6000000004945"
          "4e44ae426082"));
  put(folder / "alpha.png",
      from_hex(
          "89504e470d0a1a0a0000000d49484452000000020000000108040000005e2bb7010000000d4944415478"
          "9c6310fc9fcc0c00040f01778c14f9bc0000000049454e44ae426082"));
  CHECK(row_of(read_page(folder / "two.png")) == std::vector<float>{0, 1, 2, 3});
  CHECK(read_page(folder / "two.png").format.bits == 2);
  const Field palette = read_page(folder / "palette.png");
  CHECK(row_of(palette) == std::vector<float>{0, 200, 76.245f});
  CHECK(palette.notes == std::vector<std::string>{kPaletteNote});
  const Field alpha = read_page(folder / "alpha.png");
  CHECK(row_of(alpha) == std::vector<float>{17, 99});
  CHECK(alpha.channels_in_file == 2);
  CHECK(alpha.notes == std::vector<std::string>{kAlphaNote});
}

TEST_CASE("colour becomes BT.601 luminance with a note") {
  const TempFolder folder;
  for (const std::string name : {"a.png", "a.bmp", "a.ppm", "b.png", "b.ppm", "b.tif"}) {
    CAPTURE(name);
    const bool deep = name[0] == 'b';
    const std::uint32_t largest = deep ? 65535 : 255;
    REQUIRE(cv::imwrite((folder / name).string(), deep ? picture<std::uint16_t>(13, 8, 3, largest)
                                                       : picture<std::uint8_t>(13, 8, 3, largest)));
    const Field field = read_page(folder / name);
    CHECK(field.channels_in_file == 3);
    CHECK(field.format.bits == (deep ? 16 : 8));
    CHECK(field.notes == std::vector<std::string>{kLuminanceNote});
    double worst = 0;
    for (int y = 0; y < 8; ++y) {
      for (int x = 0; x < 13; ++x) {
        const double want = luma(pattern(x, y, 2, largest), pattern(x, y, 1, largest),
                                 pattern(x, y, 0, largest));  // OpenCV stores blue first
        worst = std::max(worst, std::abs(field.pixels.at(x, y) - want) / (want + 1));
      }
    }
    CHECK(worst <= 6e-8);  // half a unit in the last place of a float
  }
}

TEST_CASE("an alpha channel is ignored and said so") {
  const TempFolder folder;
  REQUIRE(cv::imwrite((folder / "a.png").string(), picture<std::uint8_t>(6, 5, 4, 255)));
  const Field field = read_page(folder / "a.png");
  CHECK(field.channels_in_file == 4);
  CHECK(field.notes == std::vector<std::string>{kLuminanceNote, kAlphaNote});
  const double want = luma(pattern(2, 3, 2, 255), pattern(2, 3, 1, 255), pattern(2, 3, 0, 255));
  CHECK(field.pixels.at(2, 3) == Approx(want));
}

TEST_CASE("grey of equal red, green and blue keeps its value to the bit") {
  for (int v = 0; v <= 65535; ++v) {
    if (luminance(v, v, v) != static_cast<float>(v)) FAIL("luminance of grey " << v);
  }
}

TEST_CASE("JPEG is read within its own loss") {
  const TempFolder folder;
  cv::Mat ramp(32, 48, CV_8UC1);
  for (int y = 0; y < 32; ++y) {
    for (int x = 0; x < 48; ++x) ramp.at<std::uint8_t>(y, x) = static_cast<std::uint8_t>(4 * x + y);
  }
  cv::Mat colour;
  cv::merge(std::vector<cv::Mat>{ramp, ramp, ramp}, colour);
  REQUIRE(cv::imwrite((folder / "grey.jpg").string(), ramp, {cv::IMWRITE_JPEG_QUALITY, 100}));
  REQUIRE(cv::imwrite((folder / "colour.jpeg").string(), colour,
                      {cv::IMWRITE_JPEG_QUALITY, 100, cv::IMWRITE_JPEG_PROGRESSIVE, 1}));
  for (const std::string name : {"grey.jpg", "colour.jpeg"}) {
    CAPTURE(name);
    const Field field = read_page(folder / name);
    REQUIRE(field.pixels.extent() == Extent{48, 32, 1});
    double worst = 0;
    for (int y = 0; y < 32; ++y) {
      for (int x = 0; x < 48; ++x) {
        worst = std::max(worst, std::abs(double{field.pixels.at(x, y)} - (4 * x + y)));
      }
    }
    CHECK(worst <= 3);
    CHECK(field.channels_in_file == (name[0] == 'g' ? 1 : 3));
  }
}

TEST_CASE("a picture of one pixel is a picture") {
  const TempFolder folder;
  for (const std::string name : {"a.png", "a.bmp", "a.pgm", "a.jpg", "a.tif"}) {
    CAPTURE(name);
    REQUIRE(cv::imwrite((folder / name).string(), cv::Mat(1, 1, CV_8UC1, cv::Scalar(77))));
    CHECK(row_of(read_page(folder / name)) == std::vector<float>{77});
  }
}

TEST_CASE("the content decides and not the name, and names may hold any bytes") {
  const TempFolder folder;
  const fs::path odd = folder / "Gu\xc3\x9f probe \"a'b\" \xc3\xb1 \xff.tif";
  REQUIRE(cv::imwrite((folder / "a.png").string(), picture<std::uint8_t>(7, 7, 1, 255)));
  fs::rename(folder / "a.png", odd);
  check_grey(read_page(odd), 7, 7, 8, 255);
}
