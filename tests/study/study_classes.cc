#include <chrono>
#include <cmath>
#include <cstdio>
#include <cstdlib>
#include <cstring>

#include "model/grey_levels.h"
#include "model/search_image.h"
#include "sampler/class_search.h"
#include "study/class_fields.h"

using namespace stillfield;

int main(int argc, char** argv) {
  const char* family = argv[1];
  const int side = std::atoi(argv[2]), images = std::atoi(argv[3]);
  const double contrast = std::atof(argv[4]);
  const double blur = argc > 5 ? std::atof(argv[5]) : 0;
  const Pool pool(2);
  int right = 0, all = 0;
  for (int classes = (int)(std::getenv("KMIN") ? std::atoi(std::getenv("KMIN")) : 1); classes <= (std::getenv("KMAX") ? std::atoi(std::getenv("KMAX")) : 5); ++classes) {
    int found[9] = {};
    double seconds = 0;
    for (int i = 0; i < images; ++i) {
      const auto seed = static_cast<std::uint64_t>(10000 * classes + i);
      const auto truth = study::draw_classes(family, side, classes, seed);
      const auto full = make_grey_levels(study::render_classes(truth, contrast, blur, seed).view());
      const auto grey = make_search_image(full);
      const auto t0 = std::chrono::steady_clock::now();
      const ClassSearch s = search_classes(grey, make_neighbourhood(Connectivity::kFour), false, 8, seed, pool);
      seconds += std::chrono::duration<double>(std::chrono::steady_clock::now() - t0).count();
      ++found[s.choice];
      if (std::getenv("VERBOSE") && s.choice != classes) {
        std::printf("  K %d image %d shares", classes, i);
        for (double v : truth.shares) std::printf(" %.3f", v);
        std::printf(" choice %d:", s.choice);
        for (auto& t : s.tried) std::printf(" %d:%.1f+-%.1f", t.classes, t.below_best, t.error);
        std::printf("\n");
      }
    }
    std::printf("| %s | %d | %.1f | %.1f | %d | %d |", family, side, contrast, blur, classes, images);
    for (int k = 1; k <= 8; ++k) std::printf(" %d", found[k]);
    std::printf(" | %.2f s |\n", seconds / images);
    std::fflush(stdout);
    right += found[classes]; all += images;
  }
  std::printf("right %d of %d\n", right, all);
}
