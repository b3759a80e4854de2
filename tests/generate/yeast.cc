// Stained budding yeast in low light: photon counts, camera gain, offset and read noise.
#include <algorithm>
#include <cmath>
#include <vector>

#include "generate/picture.h"

namespace stillfield::generate {
namespace {

constexpr int kSize = 384;
constexpr double kBackground = 9;  // photons
constexpr double kCell = 58;
constexpr double kCellSpread = 3;  // from cell to cell
constexpr double kBlur = 0.8;
constexpr double kGain = 4;       // grey levels an electron
constexpr double kOffset = 100;   // grey levels
constexpr double kReadNoise = 2;  // electrons

struct Ellipse {
  double x, y;
  double a, b;    // half axes
  double ux, uy;  // direction of a
  double photons;
};

double level(const Ellipse& e, double x, double y) {
  const double dx = x - e.x, dy = y - e.y;
  const double p = (dx * e.ux + dy * e.uy) / e.a, q = (dy * e.ux - dx * e.uy) / e.b;
  return p * p + q * q;
}

// Mother cells apart from each other; two of three carry a bud, from just begun to nearly grown.
std::vector<Ellipse> throw_cells(int mothers, Draws& draws) {
  std::vector<Ellipse> cells, centres;
  for (int tries = 0; tries < 20000 && static_cast<int>(centres.size()) < mothers; ++tries) {
    Ellipse mother{};
    const double dx = draws.normal(), dy = draws.normal();
    const double length = std::sqrt(dx * dx + dy * dy);
    mother.ux = dx / length;
    mother.uy = dy / length;
    mother.b = std::clamp(13.5 + 1.8 * draws.normal(), 9.0, 18.0);
    mother.a = mother.b * draws.uniform(1.02, 1.3);
    mother.x = draws.uniform(-5, kSize + 5);
    mother.y = draws.uniform(-5, kSize + 5);
    mother.photons = kCell + kCellSpread * draws.normal();
    const bool buds = draws.below(3) != 0;
    const double grown = draws.uniform(0.3, 0.85);
    const bool free = std::none_of(centres.begin(), centres.end(), [&](const Ellipse& other) {
      const double gap = 1.75 * (mother.a + other.a);
      const double ex = mother.x - other.x, ey = mother.y - other.y;
      return ex * ex + ey * ey < gap * gap;
    });
    if (!free) continue;
    centres.push_back(mother);
    cells.push_back(mother);
    if (!buds) continue;
    Ellipse bud = mother;
    bud.b = mother.b * grown;
    bud.a = bud.b * 1.1;
    const double apart = mother.a + 0.8 * bud.a;
    bud.x += mother.ux * apart;
    bud.y += mother.uy * apart;
    cells.push_back(bud);
  }
  return cells;
}

Picture yeast(const char* name, int mothers, std::uint64_t seed, int number) {
  Draws draws(seed, 200u + static_cast<std::uint64_t>(number));
  const std::vector<Ellipse> cells = throw_cells(mothers, draws);
  const SmoothField rough(draws.bits(), 9);

  Volume<std::uint8_t> truth({kSize, kSize});
  Volume<float> photons({kSize, kSize});
  for (int y = 0; y < kSize; ++y) {
    for (int x = 0; x < kSize; ++x) {
      truth.at(x, y) = 1;
      photons.at(x, y) = static_cast<float>(kBackground);
      const double edge = 1 + 0.06 * rough.at(x, y);
      for (const Ellipse& cell : cells) {
        if (level(cell, x, y) >= edge) continue;
        truth.at(x, y) = 2;
        photons.at(x, y) = static_cast<float>(cell.photons);
      }
    }
  }
  blur(photons, kBlur);

  Volume<std::uint16_t> page({kSize, kSize});
  for (int y = 0; y < kSize; ++y) {
    for (int x = 0; x < kSize; ++x) {
      const int electrons = draws.poisson(photons.at(x, y));
      const double read = kReadNoise * draws.normal();
      page.at(x, y) = quantised(kOffset + kGain * (electrons + read), 16);
    }
  }
  Picture picture{"yeast", name, 2, 16, {}, {}};
  picture.pages.push_back(std::move(page));
  picture.truth.push_back(std::move(truth));
  return picture;
}

}  // namespace

std::vector<Picture> yeast_pictures(std::uint64_t seed) {
  std::vector<Picture> pictures;
  pictures.push_back(yeast("plate-3-well-B4-field-1", 27, seed, 0));
  pictures.push_back(yeast("plate-3-well-B4-field-2", 21, seed, 1));
  pictures.push_back(yeast("plate-3-well-C1-field-1", 12, seed, 2));
  return pictures;
}

}  // namespace stillfield::generate
