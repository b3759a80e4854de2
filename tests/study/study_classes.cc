// How often `--classes auto` finds the number of classes of synthetic fields.
//
// usage: study_classes disks|cells|blobs SIDE IMAGES CONTRAST [BLUR] [--classes FIRST LAST]
// [--each] CONTRAST is the distance of neighbouring class means in standard deviations of the
// noise, BLUR the standard deviation of a Gaussian blur in px. Prints a row of a Markdown table for
// each number of classes; --each prints the scores of every image. Results: docs/trust.md.
#include <chrono>
#include <cstdio>
#include <cstdlib>
#include <string>
#include <vector>

#include "model/search_image.h"
#include "sampler/class_search.h"
#include "study/class_fields.h"

using namespace stillfield;

namespace {

constexpr int kMost = 8;

struct Options {
  std::string family;
  int side = 0;
  int images = 0;
  double contrast = 0.0;
  double blur = 0.0;
  int first = 1;
  int last = 5;
  bool each = false;
};

Options parse(const std::vector<std::string>& args) {
  Options o;
  o.family = args.at(0);
  o.side = std::stoi(args.at(1));
  o.images = std::stoi(args.at(2));
  o.contrast = std::stod(args.at(3));
  for (std::size_t i = 4; i < args.size(); ++i) {
    if (args[i] == "--classes") {
      o.first = std::stoi(args.at(i + 1));
      o.last = std::stoi(args.at(i + 2));
      i += 2;
    } else if (args[i] == "--each") {
      o.each = true;
    } else {
      o.blur = std::stod(args[i]);
    }
  }
  return o;
}

void print_scores(const study::ClassField& field, int image, const ClassSearch& search) {
  std::printf("  image %d, shares", image);
  for (const double share : field.shares) std::printf(" %.3f", share);
  std::printf(", choice %d:", search.choice);
  for (const TriedClasses& t : search.tried) {
    std::printf(" %d: %.1f +- %.1f", t.classes, t.below_best, t.error);
  }
  std::printf("\n");
}

}  // namespace

int main(int argc, char** argv) {
  if (argc < 5) {
    std::fprintf(stderr,
                 "usage: study_classes disks|cells|blobs SIDE IMAGES CONTRAST [BLUR] "
                 "[--classes FIRST LAST] [--each]\n");
    return 2;
  }
  const Options o = parse({argv + 1, argv + argc});
  const Pool pool(2);
  for (int classes = o.first; classes <= o.last; ++classes) {
    std::vector<int> found(kMost + 1);
    const auto start = std::chrono::steady_clock::now();
    for (int i = 0; i < o.images; ++i) {
      const auto seed = static_cast<std::uint64_t>(1000000 + 10000 * classes + i);
      const study::ClassField field = study::draw_classes(o.family, o.side, classes, seed);
      const auto pixels = study::render_classes(field, o.contrast, o.blur, seed);
      const GreyLevels grey = make_search_image(make_grey_levels(pixels.view()));
      const ClassSearch search =
          search_classes(grey, make_neighbourhood(Connectivity::kFour), false, kMost, seed, pool);
      ++found[static_cast<std::size_t>(search.choice)];
      if (o.each) print_scores(field, i, search);
    }
    const std::chrono::duration<double> passed = std::chrono::steady_clock::now() - start;
    std::printf("| %s | %d | %g | %g | %d | %d |", o.family.c_str(), o.side, o.contrast, o.blur,
                classes, o.images);
    for (int k = 1; k <= kMost; ++k) std::printf(" %d", found[static_cast<std::size_t>(k)]);
    std::printf(" | %.1f |\n", passed.count() / o.images);
    std::fflush(stdout);
  }
}
