// TIFF files made with libtiff directly are read to the numbers that went in.
#include <catch2/catch.hpp>
#include <cmath>
#include <limits>

#include "image/luminance.h"
#include "image/read.h"
#include "temp_folder.h"
#include "tiff_maker.h"

using namespace stillfield;
using namespace stillfield::test;
using Catch::Matchers::Contains;

namespace {

template <typename T>
int mismatches(const fs::path& file, const TiffRecipe& recipe, int sample_format, T offset) {
  const auto value = [&](int x, int y, int c) {
    return static_cast<T>(static_cast<T>(pattern(x, y, c, 100)) + offset);
  };
  make_tiff<T>(file, recipe, sample_format, value);
  const Field field = read_page(file);
  if (field.pixels.extent() != Extent{recipe.width, recipe.height, 1}) return -1;
  if (field.format.bits != static_cast<int>(8 * sizeof(T))) return -2;
  int wrong = 0;
  for (int y = 0; y < recipe.height; ++y) {
    for (int x = 0; x < recipe.width; ++x) {
      wrong += field.pixels.at(x, y) != static_cast<float>(value(x, y, 0));
    }
  }
  return wrong;
}

int failing_sample_types(const fs::path& file, const TiffRecipe& r) {
  int failed = 0;
  failed += mismatches<std::uint8_t>(file, r, SAMPLEFORMAT_UINT, 150) != 0;
  failed += mismatches<std::int8_t>(file, r, SAMPLEFORMAT_INT, -90) != 0;
  failed += mismatches<std::uint16_t>(file, r, SAMPLEFORMAT_UINT, 65000) != 0;
  failed += mismatches<std::int16_t>(file, r, SAMPLEFORMAT_INT, -30000) != 0;
  failed += mismatches<std::uint32_t>(file, r, SAMPLEFORMAT_UINT, 1u << 23) != 0;
  failed += mismatches<std::int32_t>(file, r, SAMPLEFORMAT_INT, -(1 << 23)) != 0;
  failed += mismatches<float>(file, r, SAMPLEFORMAT_IEEEFP, -0.37f) != 0;
  failed += mismatches<double>(file, r, SAMPLEFORMAT_IEEEFP, 0.1) != 0;
  return failed;
}

Field fax_like(const fs::path& file, int bits, int photometric,
               const std::vector<std::uint8_t>& row, int width) {
  TIFF* tiff = TIFFOpen(file.c_str(), "w");
  TIFFSetField(tiff, TIFFTAG_IMAGEWIDTH, width);
  TIFFSetField(tiff, TIFFTAG_IMAGELENGTH, 1);
  TIFFSetField(tiff, TIFFTAG_BITSPERSAMPLE, bits);
  TIFFSetField(tiff, TIFFTAG_SAMPLESPERPIXEL, 1);
  TIFFSetField(tiff, TIFFTAG_PHOTOMETRIC, photometric);
  auto data = row;
  TIFFWriteEncodedStrip(tiff, 0, data.data(), static_cast<tmsize_t>(data.size()));
  TIFFClose(tiff);
  return read_page(file);
}

std::vector<float> row_of(const Field& field) {
  return {field.pixels.row(0), field.pixels.row(0) + field.pixels.width()};
}

}  // namespace

TEST_CASE("every sample type in strips and tiles, compressed or not, either byte order, BigTIFF") {
  const TempFolder folder;
  for (const int compression :
       {COMPRESSION_NONE, COMPRESSION_LZW, COMPRESSION_ADOBE_DEFLATE, COMPRESSION_PACKBITS}) {
    for (const int tile : {0, 16}) {
      for (const char* mode : {"wl", "wb", "w8"}) {
        CAPTURE(compression, tile, mode);
        TiffRecipe recipe;
        recipe.compression = compression;
        recipe.tile = tile;
        recipe.mode = mode;
        CHECK(failing_sample_types(folder / "a.tif", recipe) == 0);
      }
    }
  }
}

TEST_CASE("predictors are undone") {
  const TempFolder folder;
  TiffRecipe recipe;
  recipe.compression = COMPRESSION_LZW;
  recipe.predictor = PREDICTOR_HORIZONTAL;
  CHECK(mismatches<std::uint16_t>(folder / "a.tif", recipe, SAMPLEFORMAT_UINT, 5) == 0);
  recipe.compression = COMPRESSION_ADOBE_DEFLATE;
  recipe.predictor = PREDICTOR_FLOATINGPOINT;
  CHECK(mismatches<float>(folder / "a.tif", recipe, SAMPLEFORMAT_IEEEFP, 0.25f) == 0);
}

TEST_CASE("RGB and RGBA, interleaved or in planes, become the same luminance") {
  const TempFolder folder;
  for (const bool separate : {false, true}) {
    for (const int tile : {0, 16}) {
      for (const int channels : {3, 4}) {
        CAPTURE(separate, tile, channels);
        TiffRecipe recipe;
        recipe.channels = channels;
        recipe.photometric = PHOTOMETRIC_RGB;
        recipe.separate = separate;
        recipe.tile = tile;
        make_tiff<std::uint16_t>(folder / "a.tif", recipe, SAMPLEFORMAT_UINT,
                                 [](int x, int y, int c) {
                                   return static_cast<std::uint16_t>(pattern(x, y, c, 65535));
                                 });
        const Field field = read_page(folder / "a.tif");
        CHECK(field.channels_in_file == channels);
        CHECK(field.notes.size() == (channels == 3 ? 1u : 2u));
        int wrong = 0;
        for (int y = 0; y < recipe.height; ++y) {
          for (int x = 0; x < recipe.width; ++x) {
            const double want =
                luma(pattern(x, y, 0, 65535), pattern(x, y, 1, 65535), pattern(x, y, 2, 65535));
            wrong += std::abs(field.pixels.at(x, y) - want) > 0.004;  // half an ulp below 65536
          }
        }
        CHECK(wrong == 0);
      }
    }
  }
}

TEST_CASE("JPEG-compressed YCbCr TIFF is read as RGB") {
  const TempFolder folder;
  TIFF* tiff = TIFFOpen((folder / "a.tif").c_str(), "w");
  TIFFSetField(tiff, TIFFTAG_COMPRESSION, COMPRESSION_JPEG);
  TIFFSetField(tiff, TIFFTAG_JPEGCOLORMODE, JPEGCOLORMODE_RGB);
  TIFFSetField(tiff, TIFFTAG_JPEGQUALITY, 100);
  TiffRecipe recipe;
  recipe.channels = 3;
  recipe.photometric = PHOTOMETRIC_YCBCR;
  recipe.compression = COMPRESSION_JPEG;
  recipe.rows_per_strip = 16;
  add_page<std::uint8_t>(tiff, recipe, SAMPLEFORMAT_UINT,
                         [](int x, int y, int) { return static_cast<std::uint8_t>(4 * x + y); });
  TIFFClose(tiff);
  const Field field = read_page(folder / "a.tif");
  double worst = 0;
  for (int y = 0; y < recipe.height; ++y) {
    for (int x = 0; x < recipe.width; ++x) {
      worst = std::max(worst, std::abs(double{field.pixels.at(x, y)} - (4 * x + y)));
    }
  }
  CHECK(worst <= 4);
}

TEST_CASE("samples of 1, 4 and 12 bits, and zero for white") {
  const TempFolder folder;
  const fs::path file = folder / "a.tif";
  CHECK(row_of(fax_like(file, 1, PHOTOMETRIC_MINISBLACK, {0xa0}, 4)) ==
        std::vector<float>{1, 0, 1, 0});
  CHECK(row_of(fax_like(file, 4, PHOTOMETRIC_MINISBLACK, {0x1f, 0x70}, 3)) ==
        std::vector<float>{1, 15, 7});
  CHECK(row_of(fax_like(file, 12, PHOTOMETRIC_MINISBLACK, {0xff, 0xe0, 0x01}, 2)) ==
        std::vector<float>{4094, 1});
  const Field inverted = fax_like(file, 8, PHOTOMETRIC_MINISWHITE, {0, 200, 255}, 3);
  CHECK(row_of(inverted) == std::vector<float>{255, 55, 0});
  CHECK(inverted.notes.size() == 1);
}

TEST_CASE("a palette becomes luminance with a note") {
  const TempFolder folder;
  TIFF* tiff = TIFFOpen((folder / "a.tif").c_str(), "w");
  std::vector<std::uint16_t> red(256), green(256), blue(256);
  red[7] = green[7] = blue[7] = 200 * 257;
  red[9] = 255 * 257;
  TIFFSetField(tiff, TIFFTAG_BITSPERSAMPLE, 8);  // libtiff takes the table's size from it
  TIFFSetField(tiff, TIFFTAG_COLORMAP, red.data(), green.data(), blue.data());
  TiffRecipe recipe;
  recipe.photometric = PHOTOMETRIC_PALETTE;
  add_page<std::uint8_t>(tiff, recipe, SAMPLEFORMAT_UINT,
                         [](int x, int, int) { return static_cast<std::uint8_t>(x % 2 ? 7 : 9); });
  TIFFClose(tiff);
  const Field field = read_page(folder / "a.tif");
  CHECK(field.pixels.at(1, 0) == 200.0f);
  CHECK(field.pixels.at(0, 0) == Approx(0.299 * 255));
  CHECK(field.notes == std::vector<std::string>{kPaletteNote});
}

TEST_CASE("NaN stays, infinity becomes missing with a note, large integers are noted") {
  const TempFolder folder;
  const float nan = std::numeric_limits<float>::quiet_NaN();
  const float inf = std::numeric_limits<float>::infinity();
  make_tiff<float>(folder / "a.tif", {}, SAMPLEFORMAT_IEEEFP, [&](int x, int, int) {
    return x == 0 ? nan : x == 1 ? inf : 2.5f;
  });
  const Field field = read_page(folder / "a.tif");
  CHECK(std::isnan(field.pixels.at(0, 0)));
  CHECK(std::isnan(field.pixels.at(1, 0)));
  CHECK(field.pixels.at(2, 0) == 2.5f);
  CHECK(field.notes == std::vector<std::string>{"37 infinite pixel(s) treated as missing"});

  make_tiff<std::uint32_t>(folder / "b.tif", {}, SAMPLEFORMAT_UINT,
                           [](int, int, int) { return 4000000001u; });
  CHECK(read_page(folder / "b.tif").notes.size() == 1);
}

TEST_CASE("pages count without reduced copies and masks") {
  const TempFolder folder;
  TIFF* tiff = TIFFOpen((folder / "a.tif").c_str(), "w");
  const std::uint32_t kinds[] = {FILETYPE_REDUCEDIMAGE, 0, FILETYPE_MASK, FILETYPE_PAGE};
  for (int page = 0; page < 4; ++page) {
    TIFFSetField(tiff, TIFFTAG_SUBFILETYPE, kinds[page]);
    add_page<std::uint16_t>(tiff, {}, SAMPLEFORMAT_UINT, [page](int, int, int) {
      return static_cast<std::uint16_t>(1000 * page);
    });
  }
  TIFFClose(tiff);
  REQUIRE(count_pages(folder / "a.tif") == 2);
  CHECK(read_page(folder / "a.tif", 0).pixels.at(3, 3) == 1000.0f);
  CHECK(read_page(folder / "a.tif", 1).pixels.at(3, 3) == 3000.0f);
  for (const int page : {-1, 2}) {
    CHECK_THAT(sentence_of(ErrorKind::kInput, [&] { read_page(folder / "a.tif", page); }),
               Contains("there is no page " + std::to_string(page + 1)));
  }
}

TEST_CASE("the pixel size comes from resolution tags with a known unit and square pixels") {
  const TempFolder folder;
  const auto size_for = [&](int unit, double x, double y) {
    TIFF* tiff = TIFFOpen((folder / "a.tif").c_str(), "w");
    TIFFSetField(tiff, TIFFTAG_XRESOLUTION, x);
    TIFFSetField(tiff, TIFFTAG_YRESOLUTION, y);
    TIFFSetField(tiff, TIFFTAG_RESOLUTIONUNIT, unit);
    add_page<std::uint8_t>(tiff, {}, SAMPLEFORMAT_UINT,
                           [](int, int, int) { return std::uint8_t{1}; });
    TIFFClose(tiff);
    return read_page(folder / "a.tif").pixel_size_um;
  };
  CHECK(size_for(RESUNIT_CENTIMETER, 40000, 40000).value() == Approx(0.25).epsilon(1e-7));
  CHECK(size_for(RESUNIT_INCH, 254, 254).value() == Approx(100).epsilon(1e-7));
  CHECK_FALSE(size_for(RESUNIT_NONE, 254, 254));
  CHECK_FALSE(size_for(RESUNIT_INCH, 254, 127));
}
