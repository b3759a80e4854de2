#include "job/learn_patches.h"

#include <algorithm>
#include <utility>
#include <vector>

#include "core/error.h"
#include "image/walk.h"
#include "job/mask.h"
#include "job/prepared_plane.h"
#include "random/counters.h"

namespace stillfield {
namespace {

struct LikePage {
  std::filesystem::path file;
  int page = 0;
};

std::vector<LikePage> like_pages(const std::filesystem::path& from) {
  std::vector<LikePage> all;
  for (const InputFile& input : find_all_inputs({from})) {
    const int pages = count_pages(input.path);
    for (int page = 0; page < pages; ++page) all.push_back({input.path, page});
  }
  if (all.size() <= kMostLearnedImages) return all;
  std::vector<LikePage> chosen;
  for (std::size_t i = 0; i < kMostLearnedImages; ++i) {
    chosen.push_back(all[i * all.size() / kMostLearnedImages]);
  }
  return chosen;
}

}  // namespace

PatchMixture learn_patches(const DenoiseSettings& settings, const ReadLimits& limits,
                           const Pool& pool, const JobObserver& observer) {
  std::vector<PreparedPlane> planes;
  for (const LikePage& like : like_pages(settings.learn_from)) {
    if (observer.stop_requested()) throw Error(ErrorKind::kInterrupt, "stopped on request");
    const Field field = read_page(like.file, like.page, limits);
    try {
      const Volume<std::uint8_t> all = read_mask({}, {}, field.pixels.extent(), limits);
      planes.push_back(prepare_plane(field.pixels, all, settings, pool));
    } catch (const Error& error) {
      throw Error(error.kind(), like.file.string() + ": " + error.what());
    }
  }
  std::vector<PatchPlane> noisy;
  for (const PreparedPlane& plane : planes) {
    noisy.push_back({&plane.start, plane.transform->sd()});
  }
  PatchSettings patches;
  patches.patch = settings.patch;
  patches.quick = settings.quick;
  return learn_patch_mixture(noisy, patches, chain_key(settings.seed, 0), pool);
}

}  // namespace stillfield
