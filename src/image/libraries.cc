#include "image/libraries.h"

#include <openssl/crypto.h>
#include <tiffio.h>

#include <opencv2/core.hpp>
#include <pugixml.hpp>
#include <string>
#include <string_view>

namespace stillfield {
namespace {

// The first word of `text` that starts with a digit: "LIBTIFF, Version 4.5.0\n..." -> "4.5.0".
std::string first_number(std::string_view text) {
  std::size_t at = text.find_first_of("0123456789");
  while (at != std::string_view::npos && at > 0 && text[at - 1] != ' ') {
    at = text.find_first_of("0123456789", at + 1);
  }
  if (at == std::string_view::npos) return std::string(text);
  return std::string(text.substr(at, text.find_first_of(" \n", at) - at));
}

// 1130 -> "1.13".
std::string pugixml_version() {
  return std::to_string(PUGIXML_VERSION / 1000) + "." + std::to_string(PUGIXML_VERSION % 1000 / 10);
}

}  // namespace

void use_one_thread_in_image_libraries() {
  cv::setNumThreads(1);
}

std::vector<LibraryVersion> image_library_versions() {
  return {{"OpenCV", cv::getVersionString()},
          {"libtiff", first_number(TIFFGetVersion())},
          {"OpenSSL", first_number(OpenSSL_version(OPENSSL_VERSION))},
          {"pugixml", pugixml_version()}};
}

}  // namespace stillfield
