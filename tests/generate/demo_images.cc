// generate_demo_images OUTDIR SEED: writes the pictures of images/ and their truth.
//
// The committed files were made with the seed of tests/generate/CMakeLists.txt; a test makes them
// again and compares bytes.
#include <charconv>
#include <cstdint>
#include <exception>
#include <filesystem>
#include <fstream>
#include <iostream>
#include <string>

#include "core/error.h"
#include "generate/picture.h"
#include "generate/write.h"

namespace {

using namespace stillfield;

std::uint64_t parsed_seed(const std::string& text) {
  std::uint64_t seed = 0;
  const auto [end, error] = std::from_chars(text.data(), text.data() + text.size(), seed);
  if (error != std::errc() || end != text.data() + text.size()) {
    throw Error(ErrorKind::kUsage, "\"" + text + "\" is no seed; give a whole number from 0 up");
  }
  return seed;
}

void write_all(const std::filesystem::path& root, std::uint64_t seed) {
  std::string table = "image,page,class,pixels,area_fraction\n";
  for (const auto& picture : generate::cast_iron_pictures(seed)) {
    table += generate::write_picture(root, picture);
  }
  for (const auto& picture : generate::yeast_pictures(seed)) {
    table += generate::write_picture(root, picture);
  }
  table += generate::write_picture(root, generate::delivery_notes(seed));

  const std::filesystem::path path = root / "truth" / "area-fractions.csv";
  std::ofstream csv(path, std::ios::binary);
  csv << table;
  if (!csv.flush()) throw Error(ErrorKind::kOutput, path.string() + " cannot be written");
}

}  // namespace

int main(int argc, char** argv) {
  if (argc != 3) {
    std::cerr << "usage: generate_demo_images OUTDIR SEED\n";
    return kExitBadUsage;
  }
  try {
    write_all(argv[1], parsed_seed(argv[2]));
  } catch (const std::exception& error) {
    std::cerr << "generate_demo_images: " << error.what() << "\n";
    return kExitSomeFailed;
  }
  return kExitAllDone;
}
