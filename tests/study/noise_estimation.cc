// Errors of the noise estimates on clean pictures to which known noise is added.
//
// usage: study_noise_estimation gaussian|photon|rician|auto|impulses PICTURE.tif ...
// Pictures are on a scale of 0..255; noise_estimation.py supplies them. Prints Markdown tables.
// Results: docs/accuracy.md.
#include <algorithm>
#include <cmath>
#include <cstdio>
#include <filesystem>
#include <string>
#include <vector>

#include "image/read.h"
#include "model/impulse_noise.h"
#include "model/noise_estimate.h"
#include "random/stream.h"

using namespace stillfield;

namespace {

struct Picture {
  std::string name;
  Volume<float> pixels;
};

// A noise condition: photon when peak > 0, else white noise of standard deviation sd (Rician when
// `magnitude`).
struct Condition {
  std::string name;
  double sd = 0.0, peak = 0.0;
  bool magnitude = false;
};

Volume<float> noisy(const Volume<float>& clean, const Condition& c, std::uint64_t seed) {
  RandomStream random(chain_key(seed, 1), Purpose::kSimulation, 2);
  Volume<float> out(clean.extent());
  for (int y = 0; y < clean.height(); ++y) {
    for (int x = 0; x < clean.width(); ++x) {
      double v = clean.at(x, y);
      if (c.peak > 0.0) v = static_cast<double>(random.poisson(v / 255.0 * c.peak));
      v += c.sd > 0.0 ? c.sd * random.normal() : 0.0;
      if (c.magnitude) {
        const double i = c.sd * random.normal();
        v = std::sqrt(v * v + i * i);
      }
      out.at(x, y) = static_cast<float>(v);
    }
  }
  return out;
}

// A tenth of the pixels replaced by 0 or 255; returns where.
Volume<std::uint8_t> strike(Volume<float>& image, std::uint64_t seed) {
  RandomStream random(chain_key(seed, 2), Purpose::kSimulation, 3);
  Volume<std::uint8_t> hit(image.extent());
  for (int y = 0; y < image.height(); ++y) {
    for (int x = 0; x < image.width(); ++x) {
      hit.at(x, y) = random.uniform() < 0.1;
      const float value = random.uniform() < 0.5 ? 0.0f : 255.0f;
      if (hit.at(x, y) != 0) image.at(x, y) = value;
    }
  }
  return hit;
}

// Shares, in percent.
struct Detection {
  double found = 0.0;  // of the pixels hit
  double false_alarms = 0.0;
};

Detection detection_of(const Volume<std::uint8_t>& hit, const ImpulseMap& map) {
  double hits = 0.0, found = 0.0, rest = 0.0, wrong = 0.0;
  for (int y = 0; y < hit.height(); ++y) {
    for (int x = 0; x < hit.width(); ++x) {
      (hit.at(x, y) != 0 ? hits : rest) += 1.0;
      if (map.found(x, y)) (hit.at(x, y) != 0 ? found : wrong) += 1.0;
    }
  }
  return {hits > 0.0 ? 100.0 * found / hits : 0.0, 100.0 * wrong / rest};
}

Volume<std::uint8_t> all_usable(Extent extent) {
  Volume<std::uint8_t> usable(extent);
  for (int y = 0; y < extent.height; ++y) std::fill_n(usable.row(y), extent.width, std::uint8_t{1});
  return usable;
}

double median(std::vector<double> v) {
  std::sort(v.begin(), v.end());
  return v.empty() ? 0.0 : 0.5 * (v[(v.size() - 1) / 2] + v[v.size() / 2]);
}

// Signed errors in percent of the sd curve over the picture's pixels; the dark end, below 2 % of
// the peak, is left out.
std::vector<double> curve_errors(const Picture& p, const Condition& c, const NoiseModel& m) {
  std::vector<double> e;
  for (int y = 0; y < p.pixels.height(); y += 3) {
    for (int x = 0; x < p.pixels.width(); x += 3) {
      const double v = p.pixels.at(x, y);
      if (c.peak > 0.0 && v < 0.02 * 255.0) continue;
      const double level = c.peak > 0.0 ? v / 255.0 * c.peak : v;
      const double truth = c.peak > 0.0 ? std::sqrt(level + c.sd * c.sd) : c.sd;
      const double found = m.kind == NoiseKind::kRician ? m.sd : m.sd_at(level);
      e.push_back(100.0 * (found / truth - 1.0));
    }
  }
  return e;
}

double true_mid_sd(const Condition& c, const NoiseModel& m) {
  if (c.magnitude || c.peak == 0.0) return c.sd;
  return std::sqrt(std::max(m.mid_grey, 0.0) + c.sd * c.sd);
}

std::vector<Condition> conditions(const std::string& mode) {
  if (mode == "photon") {
    return {{"peak 100", 0, 100},         {"peak 30", 0, 30},         {"peak 10", 0, 10},
            {"peak 100, read 4", 4, 100}, {"peak 30, read 2", 2, 30}, {"peak 10, read 1", 1, 10}};
  }
  if (mode == "rician")
    return {{"sd 5", 5, 0, true}, {"sd 15", 15, 0, true}, {"sd 30", 30, 0, true}};
  std::vector<Condition> all = {{"sd 5", 5}, {"sd 15", 15}, {"sd 25", 25}, {"sd 50", 50}};
  if (mode == "auto") {
    for (const Condition& c : conditions("photon")) all.push_back(c);
  }
  return all;
}

// Everything estimated from the image: detection, false alarms and the noise level.
void impulse_table(const std::vector<Picture>& pictures, const Pool& pool) {
  std::printf(
      "| picture | found, %% of hit | false, %% of the rest | error of sd, %% | "
      "false without impulses: sd 0 | sd 15 | sd 25 |\n|---|---|---|---|---|---|---|\n");
  std::vector<std::vector<double>> column(6);
  for (std::size_t i = 0; i < pictures.size(); ++i) {
    const Volume<std::uint8_t> usable = all_usable(pictures[i].pixels.extent());
    Volume<float> image = noisy(pictures[i].pixels, {"", 15.0}, 900 + i);
    const Volume<std::uint8_t> hit = strike(image, i);
    const NoiseWithImpulses n =
        estimate_noise_and_impulses(NoiseKind::kGaussian, image.view(), usable.view(), pool);
    const Detection d = detection_of(hit, n.impulses);
    std::vector<double> row = {d.found, d.false_alarms, 100.0 * (n.noise.sd / 15.0 - 1.0)};
    for (const double sd : {0.0, 15.0, 25.0}) {
      const Volume<float> plain = noisy(pictures[i].pixels, {"", sd}, 950 + i);
      const NoiseModel model =
          estimate_noise(NoiseKind::kGaussian, plain.view(), usable.view(), pool);
      const ImpulseMap map = detect_impulses(plain.view(), usable.view(), model, pool);
      const NoiseWithImpulses both =
          estimate_noise_and_impulses(NoiseKind::kGaussian, plain.view(), usable.view(), pool);
      row.push_back(100.0 * std::max(map.share, both.impulses.share));
    }
    std::printf("| %s |", pictures[i].name.c_str());
    for (std::size_t k = 0; k < row.size(); ++k) {
      std::printf(" %.2f |", row[k]);
      column[k].push_back(row[k]);
    }
    std::printf("\n");
  }
  std::printf("| mean |");
  for (const std::vector<double>& c : column) {
    double sum = 0.0;
    for (const double v : c) sum += v;
    std::printf(" %.2f |", sum / static_cast<double>(c.size()));
  }
  std::printf("\n");
}

}  // namespace

int main(int argc, char** argv) {
  const std::string mode = argc > 1 ? argv[1] : "gaussian";
  std::vector<Picture> pictures;
  for (int i = 2; i < argc; ++i) {
    pictures.push_back({std::filesystem::path(argv[i]).stem().string(), read_page(argv[i]).pixels});
  }
  const Pool pool(2);
  if (mode == "impulses") {
    impulse_table(pictures, pool);
    return 0;
  }
  const std::vector<Condition> all = conditions(mode);
  std::printf("| picture |");
  for (const Condition& c : all) std::printf(" %s |", c.name.c_str());
  std::printf("\n|---|");
  for (std::size_t i = 0; i < all.size(); ++i) std::printf("---|");
  std::printf("\n");
  std::vector<std::vector<double>> error(all.size());
  std::vector<int> covered(all.size()), warned(all.size()), photon(all.size());
  for (std::size_t i = 0; i < pictures.size(); ++i) {
    std::printf("| %s |", pictures[i].name.c_str());
    for (std::size_t k = 0; k < all.size(); ++k) {
      const Volume<float> y = noisy(pictures[i].pixels, all[k], 100 * i + k);
      const Volume<std::uint8_t> usable = all_usable(y.extent());
      std::optional<NoiseKind> kind;
      if (mode == "gaussian") kind = NoiseKind::kGaussian;
      if (mode == "photon") kind = NoiseKind::kPhoton;
      if (mode == "rician") kind = NoiseKind::kRician;
      const NoiseModel m = estimate_noise(kind, y.view(), usable.view(), pool);
      std::vector<double> e = curve_errors(pictures[i], all[k], m);
      const double signed_median = median(e);
      for (double& v : e) v = std::fabs(v);
      error[k].push_back(median(e));
      const double truth = true_mid_sd(all[k], m);
      covered[k] += m.lower90 <= truth && truth <= m.upper90;
      const bool textured = m.warning.find("texture") != std::string::npos;
      warned[k] += textured;
      photon[k] += m.kind == NoiseKind::kPhoton;
      std::printf(" %+.1f%s%s |", signed_median, textured ? " (warned)" : "",
                  mode == "auto" ? (m.kind == NoiseKind::kPhoton ? " p" : " g") : "");
    }
    std::printf("\n");
  }
  const auto row = [&](const char* name, auto value) {
    std::printf("| %s |", name);
    for (std::size_t k = 0; k < all.size(); ++k) std::printf(" %.2f |", value(k));
    std::printf("\n");
  };
  const double n = std::max(1.0, static_cast<double>(pictures.size()));
  row("median of the absolute error, %", [&](std::size_t k) { return median(error[k]); });
  row("90 % interval covers, share", [&](std::size_t k) { return covered[k] / n; });
  row("warned, share", [&](std::size_t k) { return warned[k] / n; });
  row("photon chosen, share", [&](std::size_t k) { return photon[k] / n; });
}
