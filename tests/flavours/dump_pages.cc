// What the reader makes of files, for comparison by flavours.py.
//
// Reads file names, one a line. For each writes FILE.raw, native 32-bit floats of all pages one
// after another (three planes for colour), and one line a page to standard output, fields separated
// by tabs:
//   page  width  height  planes  kind  bits  pixel_size_um or -  its source or -  z c t or -
// or "refused" and the sentence.
#include <cstdio>
#include <fstream>
#include <iostream>
#include <string>

#include "core/error.h"
#include "image/read.h"

namespace {

using namespace stillfield;

void append(const Volume<float>& plane, std::ofstream& raw) {
  for (int y = 0; y < plane.height(); ++y) {
    raw.write(reinterpret_cast<const char*>(plane.row(y)),
              static_cast<std::streamsize>(sizeof(float)) * plane.width());
  }
}

const char* name_of_kind(SampleKind kind) {
  return kind == SampleKind::kUnsigned ? "u" : kind == SampleKind::kSigned ? "i" : "f";
}

void dump(const std::string& file) {
  std::ofstream raw(file + ".raw", std::ios::binary);
  const int pages = count_pages(file);
  for (int page = 0; page < pages; ++page) {
    const Field field = read_page(file, page, {}, ColourMode::kSeparate);
    if (field.colour.empty()) append(field.pixels, raw);
    for (const Volume<float>& plane : field.colour) append(plane, raw);
    std::printf("page\t%d\t%d\t%d\t%s\t%d\t", field.pixels.width(), field.pixels.height(),
                field.colour.empty() ? 1 : 3, name_of_kind(field.format.kind), field.format.bits);
    if (field.pixel_size_um) {
      std::printf("%.17g\t%s\t", *field.pixel_size_um, name_of(field.pixel_size_source).c_str());
    } else {
      std::printf("-\t-\t");
    }
    if (field.ome) {
      const OmePlane& place = field.ome->place;
      std::printf("%d %d %d\n", place.z, place.c, place.t);
    } else {
      std::printf("-\n");
    }
  }
}

}  // namespace

int main() {
  std::string file;
  while (std::getline(std::cin, file)) {
    std::printf("file\t%s\n", file.c_str());
    try {
      dump(file);
    } catch (const Error& error) {
      std::printf("refused\t%s\n", error.what());
    }
  }
  return 0;
}
