#include "generate/write.h"

#include <tiffio.h>

#include <cstdio>
#include <memory>
#include <opencv2/core.hpp>
#include <opencv2/imgcodecs.hpp>
#include <vector>

#include "core/error.h"

namespace stillfield::generate {
namespace {

[[noreturn]] void cannot_write(const std::filesystem::path& path) {
  throw Error(ErrorKind::kOutput, path.string() + " cannot be written; check the folder's rights");
}

template <typename T>
void write_png(const std::filesystem::path& path, const Volume<T>& page) {
  cv::Mat1b pixels(page.height(), page.width());
  for (int y = 0; y < page.height(); ++y) {
    for (int x = 0; x < page.width(); ++x) pixels(y, x) = static_cast<uchar>(page.at(x, y));
  }
  if (!cv::imwrite(path.string(), pixels, {cv::IMWRITE_PNG_COMPRESSION, 9})) cannot_write(path);
}

template <typename Sample, typename T>
void write_tiff(const std::filesystem::path& path, const std::vector<Volume<T>>& pages) {
  const std::unique_ptr<TIFF, decltype(&TIFFClose)> tiff(TIFFOpen(path.c_str(), "w"), TIFFClose);
  if (!tiff) cannot_write(path);
  for (std::size_t i = 0; i < pages.size(); ++i) {
    const Volume<T>& page = pages[i];
    TIFFSetField(tiff.get(), TIFFTAG_IMAGEWIDTH, page.width());
    TIFFSetField(tiff.get(), TIFFTAG_IMAGELENGTH, page.height());
    TIFFSetField(tiff.get(), TIFFTAG_BITSPERSAMPLE, static_cast<int>(8 * sizeof(Sample)));
    TIFFSetField(tiff.get(), TIFFTAG_SAMPLESPERPIXEL, 1);
    TIFFSetField(tiff.get(), TIFFTAG_PHOTOMETRIC, PHOTOMETRIC_MINISBLACK);
    TIFFSetField(tiff.get(), TIFFTAG_PLANARCONFIG, PLANARCONFIG_CONTIG);
    TIFFSetField(tiff.get(), TIFFTAG_COMPRESSION, COMPRESSION_ADOBE_DEFLATE);
    TIFFSetField(tiff.get(), TIFFTAG_ZIPQUALITY, 9);
    TIFFSetField(tiff.get(), TIFFTAG_ROWSPERSTRIP, page.height());
    if (pages.size() > 1) {
      TIFFSetField(tiff.get(), TIFFTAG_PAGENUMBER, static_cast<int>(i),
                   static_cast<int>(pages.size()));
    }
    std::vector<Sample> row(static_cast<std::size_t>(page.width()));
    for (int y = 0; y < page.height(); ++y) {
      for (int x = 0; x < page.width(); ++x) row[x] = static_cast<Sample>(page.at(x, y));
      if (TIFFWriteScanline(tiff.get(), row.data(), static_cast<std::uint32_t>(y), 0) != 1) {
        cannot_write(path);
      }
    }
    if (TIFFWriteDirectory(tiff.get()) != 1) cannot_write(path);
  }
}

std::string fraction_lines(const std::string& image, const Picture& picture) {
  std::string lines;
  for (std::size_t i = 0; i < picture.truth.size(); ++i) {
    const Volume<std::uint8_t>& truth = picture.truth[i];
    std::vector<long> pixels(static_cast<std::size_t>(picture.classes) + 1);
    for (int y = 0; y < truth.height(); ++y) {
      for (int x = 0; x < truth.width(); ++x) ++pixels[truth.at(x, y)];
    }
    for (int k = 1; k <= picture.classes; ++k) {
      char numbers[96];
      std::snprintf(numbers, sizeof numbers, ",%zu,%d,%ld,%.8f\n", i + 1, k, pixels[k],
                    static_cast<double>(pixels[k]) / static_cast<double>(truth.extent().sites()));
      lines += image + numbers;
    }
  }
  return lines;
}

}  // namespace

std::string write_picture(const std::filesystem::path& root, const Picture& picture) {
  const bool png = picture.bits == 8 && picture.pages.size() == 1;
  const std::string file = picture.folder + "/" + picture.name + (png ? ".png" : ".tif");
  const std::filesystem::path image = root / file, truth = root / "truth" / file;
  std::filesystem::create_directories(image.parent_path());
  std::filesystem::create_directories(truth.parent_path());
  if (png) {
    write_png(image, picture.pages[0]);
    write_png(truth, picture.truth[0]);
  } else {
    if (picture.bits == 8) {
      write_tiff<std::uint8_t>(image, picture.pages);
    } else {
      write_tiff<std::uint16_t>(image, picture.pages);
    }
    write_tiff<std::uint8_t>(truth, picture.truth);
  }
  return fraction_lines(file, picture);
}

}  // namespace stillfield::generate
