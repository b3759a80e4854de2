// Restoration of clean images with added noise of known level by the patch field.
//
// usage: study_patches [OPTIONS] SIGMA CLEAN.tif ...
//   --seed N (1)  --patch P  --components K  --tilings N  --passes N  --group M  --quick
//   --threads N (2)  --repeat R: image repeated R x R by mirroring, for timing
//   --blur S: white noise convolved with a Gaussian of deviation S and scaled to SIGMA
//   --correlation none|true|estimate (none): the field's model of the noise
//   --write DIR: noisy and restored images as float TIFF
// Prints one Markdown table row an image and one of means: PSNR (range 255), coverage of mean +-
// 1.645 sd for the clean value, over all pixels and over the tenth with the largest gradient of
// the clean image, the mean width of the interval, seconds, and processor seconds a megapixel (all
// threads).
#include <algorithm>
#include <chrono>
#include <cmath>
#include <cstdio>
#include <cstdlib>
#include <ctime>
#include <filesystem>
#include <string>
#include <vector>

#include "diagnose/residual_correlation.h"
#include "image/read.h"
#include "image/write.h"
#include "random/stream.h"
#include "sampler/patch_field.h"

using namespace stillfield;

namespace {

struct Options {
  double sigma = 25.0;
  std::uint64_t seed = 1;
  int threads = 2;
  int repeat = 1;
  double blur = 0.0;
  std::string correlation = "none";
  std::string folder;
  PatchSettings settings;
  std::vector<std::string> files;
};

Options parse(int argc, char** argv) {
  Options o;
  bool have_sigma = false;
  for (int i = 1; i < argc; ++i) {
    const std::string a = argv[i];
    const auto number = [&] { return std::atoi(argv[++i]); };
    if (a == "--seed") {
      o.seed = static_cast<std::uint64_t>(number());
    } else if (a == "--patch") {
      o.settings.patch = number();
    } else if (a == "--components") {
      o.settings.components = number();
    } else if (a == "--tilings") {
      o.settings.tiling_sweeps = number();
    } else if (a == "--passes") {
      o.settings.group_passes = number();
    } else if (a == "--group") {
      o.settings.group_size = number();
    } else if (a == "--quick") {
      o.settings.quick = true;
    } else if (a == "--threads") {
      o.threads = number();
    } else if (a == "--repeat") {
      o.repeat = number();
    } else if (a == "--blur") {
      o.blur = std::atof(argv[++i]);
    } else if (a == "--correlation") {
      o.correlation = argv[++i];
    } else if (a == "--write") {
      o.folder = argv[++i];
    } else if (!have_sigma) {
      o.sigma = std::atof(a.c_str());
      have_sigma = true;
    } else {
      o.files.push_back(a);
    }
  }
  return o;
}

Volume<float> mirrored(const Volume<float>& v, int repeat) {
  Volume<float> out({v.width() * repeat, v.height() * repeat, 1});
  const auto fold = [](int i, int n) { return i / n % 2 == 0 ? i % n : n - 1 - i % n; };
  for (int y = 0; y < out.height(); ++y) {
    for (int x = 0; x < out.width(); ++x) {
      out.at(x, y) = v.at(fold(x, v.width()), fold(y, v.height()));
    }
  }
  return out;
}

// Weights of the blur along one axis, from -kBlurReach; their squares sum to 1, so that blurred
// white noise keeps its deviation.
constexpr int kBlurReach = 5;
std::vector<double> blur_weights(double blur) {
  std::vector<double> w;
  double squares = 0.0;
  for (int i = -kBlurReach; i <= kBlurReach; ++i) {
    const double at = blur > 0.0 ? std::exp(-0.5 * i * i / (blur * blur)) : i == 0;
    w.push_back(at);
    squares += at * at;
  }
  for (double& at : w) at /= std::sqrt(squares);
  return w;
}

Volume<float> unit_noise(Extent e, double blur, RandomStream& random) {
  const std::vector<double> w = blur_weights(blur);
  const int wide = e.width + 2 * kBlurReach, high = e.height + 2 * kBlurReach;
  std::vector<double> white(static_cast<std::size_t>(wide) * static_cast<std::size_t>(high));
  const auto at = [&](int x, int y) -> double& {
    return white[static_cast<std::size_t>(y * wide + x)];
  };
  if (blur > 0.0) {
    for (double& v : white) v = random.normal();
  } else {
    for (int y = 0; y < e.height; ++y) {
      for (int x = 0; x < e.width; ++x) at(x + kBlurReach, y + kBlurReach) = random.normal();
    }
  }
  Volume<float> out(e);
  for (int y = 0; y < e.height; ++y) {
    for (int x = 0; x < e.width; ++x) {
      double sum = 0.0;
      for (int v = 0; v <= 2 * kBlurReach; ++v) {
        const double row = w[static_cast<std::size_t>(v)];
        if (row == 0.0) continue;
        for (int u = 0; u <= 2 * kBlurReach; ++u) {
          sum += row * w[static_cast<std::size_t>(u)] * at(x + u, y + v);
        }
      }
      out.at(x, y) = static_cast<float>(sum);
    }
  }
  return out;
}

NoiseCorrelationModel noise_model(const Options& o, const Volume<float>& noisy) {
  constexpr int kReach = 2;
  NoiseCorrelationModel model;
  if (o.correlation == "none") return model;
  model.reach = kReach;
  if (o.correlation == "estimate") {
    Volume<std::uint8_t> usable(noisy.extent());
    for (int y = 0; y < noisy.height(); ++y) std::fill_n(usable.row(y), noisy.width(), 1);
    const NoiseCorrelation found = noise_correlation(noisy.view(), usable.view(), kReach);
    if (!found.correlated) return {};
    model.rho = found.rho;
    return model;
  }
  const std::vector<double> w = blur_weights(o.blur);
  const auto lag = [&](int by) {
    double sum = 0.0;
    for (std::size_t i = 0; i + static_cast<std::size_t>(by) < w.size(); ++i) {
      sum += w[i] * w[i + static_cast<std::size_t>(by)];
    }
    return sum;
  };
  for (int dy = -kReach; dy <= kReach; ++dy) {
    for (int dx = -kReach; dx <= kReach; ++dx) {
      const bool centre = dx == 0 && dy == 0;
      model.rho.push_back(centre ? 1.0 : lag(std::abs(dx)) * lag(std::abs(dy)));
    }
  }
  return model;
}

struct Score {
  double psnr = 0, noisy_psnr = 0, coverage = 0, edge_coverage = 0, width = 0, seconds = 0,
         cpu_seconds = 0;
};

double psnr(const Volume<float>& a, const Volume<float>& b) {
  double sum = 0.0;
  for (int y = 0; y < a.height(); ++y) {
    for (int x = 0; x < a.width(); ++x) {
      const double off = double{a.at(x, y)} - double{b.at(x, y)};
      sum += off * off;
    }
  }
  return 10.0 * std::log10(255.0 * 255.0 * static_cast<double>(a.extent().sites()) / sum);
}

// Squared central differences, one-sided at the border.
std::vector<double> edge_strength(const Volume<float>& v) {
  std::vector<double> out;
  for (int y = 0; y < v.height(); ++y) {
    for (int x = 0; x < v.width(); ++x) {
      const double dx = v.at(std::min(x + 1, v.width() - 1), y) - v.at(std::max(x - 1, 0), y);
      const double dy = v.at(x, std::min(y + 1, v.height() - 1)) - v.at(x, std::max(y - 1, 0));
      out.push_back(dx * dx + dy * dy);
    }
  }
  return out;
}

void score_intervals(const Volume<float>& clean, const IntensityMoments& m, Score& s) {
  const std::vector<double> strength = edge_strength(clean);
  std::vector<double> sorted = strength;
  const auto ninth = sorted.begin() + static_cast<std::ptrdiff_t>(sorted.size() * 9 / 10);
  std::nth_element(sorted.begin(), ninth, sorted.end());
  double covered = 0, edge_covered = 0, edges = 0, width = 0;
  std::size_t i = 0;
  for (int y = 0; y < clean.height(); ++y) {
    for (int x = 0; x < clean.width(); ++x, ++i) {
      const double half = 1.645 * std::sqrt(double{m.variance.at(x, y)});
      const bool hit = std::abs(double{m.mean.at(x, y)} - double{clean.at(x, y)}) <= half;
      covered += hit;
      width += 2.0 * half;
      if (strength[i] > *ninth) {
        edges += 1;
        edge_covered += hit;
      }
    }
  }
  const double n = static_cast<double>(strength.size());
  s.coverage = covered / n;
  s.width = width / n;
  s.edge_coverage = edge_covered / std::max(edges, 1.0);
}

}  // namespace

int main(int argc, char** argv) {
  const Options o = parse(argc, argv);
  const Pool pool(o.threads);
  std::printf("| image | noisy | PSNR | coverage | at edges | width | seconds | CPU s/MP |\n");
  std::printf("|---|---|---|---|---|---|---|---|\n");
  Score mean;
  double per_megapixel = 0.0;
  for (const std::string& file : o.files) {
    const Volume<float> clean = mirrored(read_page(file).pixels, o.repeat);
    Volume<float> noisy(clean.extent());
    RandomStream random({static_cast<std::uint32_t>(o.seed), 0}, Purpose::kSimulation);
    const Volume<float> noise = unit_noise(clean.extent(), o.blur, random);
    for (int y = 0; y < clean.height(); ++y) {
      for (int x = 0; x < clean.width(); ++x) {
        noisy.at(x, y) = static_cast<float>(clean.at(x, y) + o.sigma * double{noise.at(x, y)});
      }
    }
    const auto start = std::chrono::steady_clock::now();
    const std::clock_t cpu_start = std::clock();
    PatchSettings settings = o.settings;
    settings.noise_correlation = noise_model(o, noisy);
    const PatchResult result = restore_patches(noisy, o.sigma, settings, chain_key(o.seed, 0), pool,
                                               nullptr, nullptr, nullptr);
    Score s;
    s.seconds = std::chrono::duration<double>(std::chrono::steady_clock::now() - start).count();
    s.cpu_seconds = static_cast<double>(std::clock() - cpu_start) / CLOCKS_PER_SEC;
    s.noisy_psnr = psnr(noisy, clean);
    s.psnr = psnr(result.moments.mean, clean);
    score_intervals(clean, result.moments, s);
    const double megapixels = static_cast<double>(clean.extent().sites()) / 1e6;
    const std::string name = std::filesystem::path(file).stem().string();
    std::printf("| %s | %.2f | %.3f | %.3f | %.3f | %.2f | %.2f | %.1f |\n", name.c_str(),
                s.noisy_psnr, s.psnr, s.coverage, s.edge_coverage, s.width, s.seconds,
                s.cpu_seconds / megapixels);
    std::fflush(stdout);
    const double n = static_cast<double>(o.files.size());
    mean.noisy_psnr += s.noisy_psnr / n;
    mean.psnr += s.psnr / n;
    mean.coverage += s.coverage / n;
    mean.edge_coverage += s.edge_coverage / n;
    mean.width += s.width / n;
    mean.seconds += s.seconds / n;
    per_megapixel += s.cpu_seconds / megapixels / n;
    if (!o.folder.empty()) {
      write_tiff(o.folder + "/" + name + ".noisy.tif", View<const float>(noisy.view()));
      write_tiff(o.folder + "/" + name + ".restored.tif",
                 View<const float>(result.moments.mean.view()));
    }
  }
  std::printf("| mean | %.2f | %.3f | %.3f | %.3f | %.2f | %.2f | %.1f |\n", mean.noisy_psnr,
              mean.psnr, mean.coverage, mean.edge_coverage, mean.width, mean.seconds,
              per_megapixel);
}
