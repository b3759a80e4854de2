// Labels of one small run against a digest kept in the repository.
//
// tests/golden/segment_labels.txt changes when the model, the sampler or the random numbers change
// on purpose; README.md beside it says how to write it anew.
#include <catch2/catch.hpp>
#include <cstdlib>
#include <span>
#include <sstream>

#include "end_to_end/program.h"
#include "end_to_end/scene.h"
#include "image/digest.h"
#include "image/read.h"

using namespace stillfield;
using namespace stillfield::test;

namespace {

// Over width, height and the labels row by row, so that it does not depend on how a TIFF packs.
std::string label_digest(const fs::path& file) {
  const Field labels = read_page(file);
  std::string text =
      std::to_string(labels.pixels.width()) + " " + std::to_string(labels.pixels.height()) + "\n";
  for (int y = 0; y < labels.pixels.height(); ++y) {
    for (int x = 0; x < labels.pixels.width(); ++x) {
      text += static_cast<char>('0' + static_cast<int>(labels.pixels.at(x, y)));
    }
    text += '\n';
  }
  return sha256_hex(std::as_bytes(std::span(text)));
}

}  // namespace

TEST_CASE("labels of a small run are those of the golden digest") {
  const TempFolder folder;
  // Noise as large as the step between classes: many labels hang on the random numbers.
  save_tiff16(folder / "in/a.tif", draw_scene({96, 72, 3, 21, 1000, 200, 200}));
  std::string found;
  for (const char* neighbours : {"4", "8"}) {
    REQUIRE(segment(folder / "in", 3, folder / "out", {"--neighbours", neighbours}).code == 0);
    found += std::string(neighbours) + " " + label_digest(folder / "out/a.labels.tif") + "\n";
  }
  const fs::path golden = fs::path(STILLFIELD_SOURCE_DIR) / "tests/golden/segment_labels.txt";
  if (std::getenv("STILLFIELD_WRITE_GOLDEN") != nullptr) put(golden, found);
  CHECK(get(golden) == found);
}
