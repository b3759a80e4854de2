#include "image/file_type.h"

#include "image/file_bytes.h"

namespace stillfield {
namespace {

using std::string_view_literals::operator""sv;

// "P1" to "P6" followed by white space or a comment.
bool is_pnm(Bytes start) {
  if (start.size() < 3 || !has_text(start, 0, "P")) return false;
  const char kind = static_cast<char>(start[1]);
  return kind >= '1' && kind <= '6' &&
         " \t\r\n#"sv.find(static_cast<char>(start[2])) != std::string_view::npos;
}

bool is_tiff(Bytes start) {
  return has_text(start, 0, "II*\0"sv) || has_text(start, 0, "MM\0*"sv) ||
         has_text(start, 0, "II+\0"sv) || has_text(start, 0, "MM\0+"sv);
}

}  // namespace

FileType file_type(const std::filesystem::path& file) {
  const auto start = read_start(file, 16);
  if (is_tiff(start)) return FileType::kTiff;
  if (has_text(start, 0, "\x89PNG"sv)) return FileType::kPng;
  if (has_text(start, 0, "\xff\xd8\xff"sv)) return FileType::kJpeg;
  if (has_text(start, 0, "BM"sv)) return FileType::kBmp;
  if (is_pnm(start)) return FileType::kPnm;
  throw_input(file,
              "is not an image in a known format (TIFF, PNG, JPEG, BMP, PNM); convert it or leave "
              "it out");
}

}  // namespace stillfield
