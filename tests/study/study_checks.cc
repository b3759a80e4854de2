// How often the model checks of `segment` warn: of 50 images that break the model and 50 that do
// not (checked_images.h), through files as the program does.
//
// usage: study_checks FOLDER [FIRST LAST] [--full]
// Writes the images and results into FOLDER; prints a line an image and a Markdown table.
// --full: default targets of convergence and limit of sweeps, instead of the targets of --quick
// and kQuickSweeps: the checks look at draws, not at how many there were.
#include <cmath>
#include <cstdio>
#include <filesystem>
#include <map>
#include <string>
#include <vector>

#include "image/write.h"
#include "job/segment_field.h"
#include "study/checked_images.h"

using namespace stillfield;
namespace fs = std::filesystem;

namespace {

constexpr int kQuickSweeps = 1500;

ImageRecord segment_image(const study::CheckedImage& image, const fs::path& folder, int number,
                          bool full, const Pool& pool) {
  FieldTask task;
  task.relative = "image-" + std::to_string(number) + ".tif";
  task.file = folder / task.relative;
  task.stem = folder / ("image-" + std::to_string(number));
  const Volume<float> pixels = study::draw(image);
  write_tiff(task.file, pixels.view(), TiffOptions{});
  SegmentSettings settings;
  settings.classes = image.asked_classes;
  settings.replicates = 0;  // the bootstrap changes measurements, not checks
  if (!full) {
    settings.target = {1.05, 100, 0.02};
    settings.schedule.max_sweeps = kQuickSweeps;
  }
  RunSettings run;
  run.output = folder;
  JobObserver observer;
  LogPartitionMemo memo;
  return segment_field(task, settings, run, pool, observer, memo);
}

struct Row {
  int images = 0, flagged = 0, look = 0, doubtful = 0, converged = 0;
  std::map<std::string, int> checks;
};

}  // namespace

int main(int argc, char** argv) {
  if (argc < 2) return 2;
  const fs::path folder = argv[1];
  fs::create_directories(folder);
  std::vector<int> numbers;
  bool full = false;
  for (int i = 2; i < argc; ++i) {
    if (std::string(argv[i]) == "--full") {
      full = true;
    } else {
      numbers.push_back(std::stoi(argv[i]));
    }
  }
  const std::vector<study::CheckedImage> images = study::checked_images();
  const int first = numbers.size() > 1 ? numbers[0] : 0;
  const int last = numbers.size() > 1 ? numbers[1] : static_cast<int>(images.size());
  const Pool pool(1);
  std::map<std::string, Row> rows;
  for (int i = first; i < last; ++i) {
    const study::CheckedImage& image = images[static_cast<std::size_t>(i)];
    const ImageRecord record = segment_image(image, folder, i, full, pool);
    Row& row = rows[image.fault];
    ++row.images;
    row.flagged += record.assessment.check_failed;
    row.look += record.assessment.word == kLook;
    row.doubtful += record.assessment.word == kDoubtful;
    row.converged += record.verdict.converged;
    std::map<std::string, bool> failed;
    std::printf("%3d %-16s %.2f sigma %.1f side %3d %s %s K %d/%d: %-8s", i, image.fault.c_str(),
                image.size_of_fault, image.sigma, image.side, image.disks ? "disks" : "blobs",
                image.eight_bits ? "8 bit" : "float", image.true_classes, image.asked_classes,
                record.assessment.word.c_str());
    for (const ModelCheck& check : record.checks) {
      failed[check.name] = failed[check.name] || check.failed;
      if (std::isnan(check.value)) {
        std::printf(" %s=-", check.name.c_str());
      } else {
        std::printf(" %s%s=%.4f/%.4f(%.3f)", check.failed ? "*" : "", check.name.c_str(),
                    check.value, check.expected, check.p_value);
      }
    }
    std::printf("%s\n", record.verdict.converged ? "" : " NOT CONVERGED");
    std::fflush(stdout);
    for (const auto& [name, was] : failed) row.checks[name] += was;
  }
  std::printf(
      "\n| fault | images | a check failed | look | doubtful | converged | which |\n"
      "|---|---|---|---|---|---|---|\n");
  for (const auto& [fault, row] : rows) {
    std::printf("| %s | %d | %d | %d | %d | %d |", fault.c_str(), row.images, row.flagged, row.look,
                row.doubtful, row.converged);
    for (const auto& [name, count] : row.checks) {
      if (count > 0) std::printf(" %s %d", name.c_str(), count);
    }
    std::printf(" |\n");
  }
}
