#include "job/edge_blur.h"

#include <algorithm>
#include <limits>
#include <vector>

#include "job/every_chain.h"
#include "measure/edge_leak.h"
#include "model/label_scene.h"

namespace stillfield {
namespace {

constexpr std::uint32_t kFirstKey = 0x2000;  // chain numbers of the simulations
constexpr int kSettling = 40;
constexpr int kCounted = 60;

struct Window {
  GreyLevels grey;
  Volume<std::uint8_t> labels;
};

Window middle(const GreyLevels& grey, View<const std::uint8_t> labels) {
  const int width = std::min(labels.width(), kBlurWindow);
  const int height = std::min(labels.height(), kBlurWindow);
  const int left = (labels.width() - width) / 2, top = (labels.height() - height) / 2;
  Window w;
  w.grey.origin = grey.origin;
  w.grey.step = grey.step;
  w.grey.levels = grey.levels;
  w.grey.histogram.assign(grey.histogram.size(), 0);
  w.grey.level = Volume<std::uint16_t>({width, height});
  w.labels = Volume<std::uint8_t>({width, height});
  for (int y = 0; y < height; ++y) {
    for (int x = 0; x < width; ++x) {
      const std::uint16_t level = grey.level.at(left + x, top + y);
      w.grey.level.at(x, y) = level;
      w.labels.at(x, y) = labels.at(left + x, top + y);
      if (level == grey.missing()) continue;
      ++w.grey.histogram[level];
      ++w.grey.observed;
    }
  }
  return w;
}

}  // namespace

double interpolate_blur(double leak, std::array<double, 4> leaks) {
  // The leak grows with the blur but for Monte Carlo error.
  for (std::size_t i = 1; i < leaks.size(); ++i) leaks[i] = std::max(leaks[i], leaks[i - 1]);
  double blur = 0;
  for (std::size_t i = 1; i < leaks.size(); ++i) {
    if (leak <= leaks[i - 1]) break;
    const double share = leak < leaks[i] ? (leak - leaks[i - 1]) / (leaks[i] - leaks[i - 1]) : 1.0;
    blur = kTriedBlurs[i - 1] + share * (kTriedBlurs[i] - kTriedBlurs[i - 1]);
  }
  return blur < kSmallestSeenBlur ? 0.0 : blur;
}

double blur_from_edges(const GreyLevels& grey, View<const std::uint8_t> labels,
                       const LabelModel& model, const ShortRunSettings& settings,
                       std::uint64_t image_seed, const Pool& pool) {
  const Window window = middle(grey, labels);
  const int classes = model.size();
  if (window.grey.observed == 0) return 0.0;
  ShortRunSettings run = settings;
  run.settling = kSettling;
  run.counted = kCounted;
  std::array<GaussianClasses, kTriedBlurs.size()> scene;
  for (std::size_t i = 0; i < scene.size(); ++i) {
    scene[i] = fit_scene(window.grey, window.labels.view(), kTriedBlurs[i], model.classes);
  }
  const int runs = static_cast<int>(kTriedBlurs.size()) * kBlurReplicates;
  std::vector<double> leak(static_cast<std::size_t>(runs));
  EveryChain every(window.labels.extent(), runs, pool);
  every.run([&](int r, WeightPlanes& weights, const Pool& inner) {
    const auto i = static_cast<std::size_t>(r / kBlurReplicates);
    const PhiloxKey key = chain_key(image_seed, kFirstKey + static_cast<std::uint32_t>(r));
    const GreyLevels simulated =
        simulate_scene(window.grey, window.labels.view(), kTriedBlurs[i], scene[i], key);
    const ShortRun again =
        run_shortly(simulated, {}, window.labels.view(), model, run, key, inner, weights);
    leak[static_cast<std::size_t>(r)] =
        edge_leak(grey_values(simulated).view(), again.labels.view(), classes);
  });
  std::array<double, kTriedBlurs.size()> mean{};
  for (std::size_t r = 0; r < leak.size(); ++r)
    mean[r / kBlurReplicates] += leak[r] / kBlurReplicates;
  return interpolate_blur(edge_leak(grey_values(window.grey).view(), window.labels.view(), classes),
                          mean);
}

}  // namespace stillfield
