// What is written is read back, by this room and by independent readers (libtiff, OpenCV).
#include "image/write.h"

#include <tiffio.h>

#include <catch2/catch.hpp>
#include <cmath>
#include <cstring>
#include <limits>
#include <opencv2/imgcodecs.hpp>

#include "image/read.h"
#include "patterns.h"
#include "temp_folder.h"

using namespace stillfield;
using namespace stillfield::test;

namespace {

template <typename T>
Volume<T> volume_of(Extent extent, std::uint32_t largest, int channel = 0) {
  Volume<T> volume(extent);
  for (int z = 0; z < extent.depth; ++z) {
    for (int y = 0; y < extent.height; ++y) {
      for (int x = 0; x < extent.width; ++x) {
        volume.at(x, y, z) = static_cast<T>(pattern(x, y + 1000 * z, channel, largest));
      }
    }
  }
  return volume;
}

template <typename T>
int differences(const Volume<float>& got, View<const T> want, int z = 0) {
  int wrong = 0;
  for (int y = 0; y < want.height(); ++y) {
    for (int x = 0; x < want.width(); ++x) {
      wrong += got.at(x, y) != static_cast<float>(want.at(x, y, z));
    }
  }
  return wrong;
}

}  // namespace

TEST_CASE("8-bit, 16-bit and float TIFF come back, also in several strips") {
  const TempFolder folder;
  for (const Extent extent : {Extent{1, 1}, Extent{83, 61}, Extent{700, 1100}}) {
    CAPTURE(extent.width);
    const auto labels = volume_of<std::uint8_t>(extent, 5);
    const auto deep = volume_of<std::uint16_t>(extent, 65535);
    const auto real = volume_of<float>(extent, 1 << 24);
    write_tiff(folder / "labels.tif", labels.view());
    write_tiff(folder / "deep.tif", deep.view());
    write_tiff(folder / "real.tif", real.view());
    CHECK(differences(read_page(folder / "labels.tif").pixels, labels.view()) == 0);
    CHECK(differences(read_page(folder / "deep.tif").pixels, deep.view()) == 0);
    CHECK(differences(read_page(folder / "real.tif").pixels, real.view()) == 0);
    CHECK(read_page(folder / "real.tif").format == SampleFormat{SampleKind::kFloat, 32});

    const cv::Mat mat = cv::imread((folder / "deep.tif").string(), cv::IMREAD_UNCHANGED);
    REQUIRE(mat.type() == CV_16UC1);
    int wrong = 0;
    for (int y = 0; y < mat.rows; ++y) {
      wrong += std::memcmp(mat.ptr(y), deep.row(y), 2 * static_cast<std::size_t>(mat.cols)) != 0;
    }
    CHECK(wrong == 0);
  }
}

TEST_CASE("the bits of floats come back: NaN, infinities aside, denormals, negative zero") {
  const TempFolder folder;
  Volume<float> image({4, 1});
  image.at(0, 0) = std::numeric_limits<float>::quiet_NaN();
  image.at(1, 0) = std::numeric_limits<float>::denorm_min();
  image.at(2, 0) = -0.0f;
  image.at(3, 0) = std::numeric_limits<float>::max();
  write_tiff(folder / "a.tif", image.view());
  const Field field = read_page(folder / "a.tif");
  CHECK(std::isnan(field.pixels.at(0, 0)));
  CHECK(std::memcmp(field.pixels.row(0) + 1, image.row(0) + 1, 3 * sizeof(float)) == 0);
}

TEST_CASE("pages carry their names, tags say who wrote them, and no date is there") {
  const TempFolder folder;
  const auto first = volume_of<float>({30, 20}, 1000, 1);
  const auto second = volume_of<float>({30, 20}, 1000, 2);
  const std::vector<TiffPage<float>> pages = {{first.view(), "class 1"},
                                              {second.view(), "class 2"}};
  write_tiff(folder / "a.tif", pages, {0.325, "probability of each class"});
  REQUIRE(count_pages(folder / "a.tif") == 2);
  CHECK(differences(read_page(folder / "a.tif", 1).pixels, second.view()) == 0);
  CHECK(read_page(folder / "a.tif", 1).pixel_size_um.value() == Approx(0.325).epsilon(1e-6));

  TIFF* tiff = TIFFOpen((folder / "a.tif").c_str(), "r");
  REQUIRE(tiff != nullptr);
  char* text = nullptr;
  std::uint16_t predictor = 0;
  std::uint16_t compression = 0;
  REQUIRE(TIFFGetField(tiff, TIFFTAG_PAGENAME, &text) == 1);
  CHECK(std::string(text) == "class 1");
  REQUIRE(TIFFGetField(tiff, TIFFTAG_SOFTWARE, &text) == 1);
  CHECK(std::string(text) == "stillfield");
  REQUIRE(TIFFGetField(tiff, TIFFTAG_IMAGEDESCRIPTION, &text) == 1);
  CHECK(std::string(text) == "probability of each class");
  CHECK(TIFFGetField(tiff, TIFFTAG_DATETIME, &text) == 0);
  TIFFGetField(tiff, TIFFTAG_PREDICTOR, &predictor);
  TIFFGetField(tiff, TIFFTAG_COMPRESSION, &compression);
  CHECK(predictor == PREDICTOR_NONE);  // readable without special decoders
  CHECK(compression == COMPRESSION_ADOBE_DEFLATE);
  TIFFClose(tiff);
}

TEST_CASE("a volume becomes a page a plane") {
  const TempFolder folder;
  const auto volume = volume_of<std::uint16_t>({21, 17, 3}, 4095);
  write_tiff(folder / "a.tif", volume.view());
  REQUIRE(count_pages(folder / "a.tif") == 3);
  for (int z = 0; z < 3; ++z) {
    CHECK(differences<std::uint16_t>(read_page(folder / "a.tif", z).pixels, volume.view(), z) == 0);
  }
}

TEST_CASE("the same pixels give the same bytes, and nothing else is left in the folder") {
  const TempFolder folder;
  const auto image = volume_of<float>({300, 200}, 9999);
  write_tiff(folder / "a.tif", image.view(), {1.5, "x"});
  write_tiff(folder / "b.tif", image.view(), {1.5, "x"});
  CHECK(get(folder / "a.tif") == get(folder / "b.tif"));
  CHECK(get(folder / "a.tif").substr(0, 4) == std::string("II*\0", 4));
  CHECK(entries_in(folder.path()) == 2);
}

TEST_CASE("previews are PNG in grey and colour") {
  const TempFolder folder;
  const auto red = volume_of<std::uint8_t>({33, 9}, 255, 0);
  const auto green = volume_of<std::uint8_t>({33, 9}, 255, 1);
  const auto blue = volume_of<std::uint8_t>({33, 9}, 255, 2);
  write_png(folder / "grey.png", red.view());
  write_png(folder / "colour.png", RgbView{red.view(), green.view(), blue.view()});
  CHECK(differences(read_page(folder / "grey.png").pixels, red.view()) == 0);
  const cv::Mat mat = cv::imread((folder / "colour.png").string(), cv::IMREAD_UNCHANGED);
  REQUIRE(mat.type() == CV_8UC3);
  int wrong = 0;
  for (int y = 0; y < 9; ++y) {
    for (int x = 0; x < 33; ++x) {
      wrong += mat.at<cv::Vec3b>(y, x) != cv::Vec3b(blue.at(x, y), green.at(x, y), red.at(x, y));
    }
  }
  CHECK(wrong == 0);
}

TEST_CASE("an image without pixels is refused") {
  const TempFolder folder;
  const Volume<float> empty;
  CHECK_THROWS_AS(write_tiff(folder / "a.tif", empty.view()), Error);
  CHECK_THROWS_AS(write_tiff(folder / "a.tif", std::vector<TiffPage<float>>{}), Error);
  CHECK(entries_in(folder.path()) == 0);
}

TEST_CASE(
    "three planes become an RGB page that reads back channel by channel, here and by OpenCV") {
  const TempFolder folder;
  std::vector<Volume<std::uint16_t>> planes;
  for (int c = 0; c < 3; ++c) {
    Volume<std::uint16_t> plane({21, 13});
    for (int y = 0; y < 13; ++y) {
      for (int x = 0; x < 21; ++x) {
        plane.at(x, y) = static_cast<std::uint16_t>(10000 * c + 100 * y + x);
      }
    }
    planes.push_back(std::move(plane));
  }
  TiffPage<std::uint16_t> page(planes[0].view());
  page.further = {planes[1].view(), planes[2].view()};
  write_tiff(folder / "a.tif", std::vector<TiffPage<std::uint16_t>>{page});
  const Field field = read_page(folder / "a.tif", 0, {}, ColourMode::kSeparate);
  CHECK(field.notes.empty());
  REQUIRE(field.colour.size() == 3);
  const cv::Mat mat = cv::imread((folder / "a.tif").string(), cv::IMREAD_UNCHANGED);
  REQUIRE(mat.type() == CV_16UC3);
  cv::imwrite((folder / "b.png").string(), mat);
  const Field from_png = read_page(folder / "b.png", 0, {}, ColourMode::kSeparate);
  REQUIRE(from_png.colour.size() == 3);
  int wrong = 0;
  for (int y = 0; y < 13; ++y) {
    for (int x = 0; x < 21; ++x) {
      for (std::size_t c = 0; c < 3; ++c) {
        const float want = planes[c].at(x, y);
        wrong += field.colour[c].at(x, y) != want;
        wrong += from_png.colour[c].at(x, y) != want;
        wrong += mat.at<cv::Vec3w>(y, x)[2 - static_cast<int>(c)] != planes[c].at(x, y);
      }
    }
  }
  CHECK(wrong == 0);
}
