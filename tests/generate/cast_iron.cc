// Nodular cast iron as a foundry laboratory sees it: dark graphite nodules, each in a halo of
// bright ferrite, with grey pearlite in what is left between them.
#include <algorithm>
#include <cmath>
#include <vector>

#include "generate/picture.h"

namespace stillfield::generate {
namespace {

constexpr int kSize = 512;
constexpr double kBrightness[] = {60, 135, 190};  // graphite, pearlite, ferrite
constexpr double kBlur = 0.6;
constexpr double kNoise = 22;

struct Nodule {
  double x, y;
  double radius;
  double stretch, ux, uy;  // long axis: factor and unit direction
  double halo;             // width of the ferrite around it
  std::uint64_t outline;   // key of its irregularity
};

struct Field {
  const char* name;
  int nodules;
  double mean_radius;
  double pearlite;  // threshold of the smooth field: lower means more pearlite
};

// Signed distance-like measure: negative inside the nodule, in pixels.
double outside(const Nodule& n, double x, double y) {
  const double dx = x - n.x, dy = y - n.y;
  const double along = (dx * n.ux + dy * n.uy) / n.stretch;
  const double across = (dy * n.ux - dx * n.uy) * n.stretch;
  const SmoothField coarse(n.outline, n.radius * 0.9), fine(n.outline + 1, 3.0);
  const double rough = 0.13 * n.radius * coarse.at(dx, dy) + 0.5 * fine.at(dx, dy);
  return std::sqrt(along * along + across * across) - n.radius - rough;
}

// Nodules thrown at random, rejected where they would touch. Radii: right-skewed, 5..22 px.
std::vector<Nodule> throw_nodules(const Field& field, Draws& draws) {
  std::vector<Nodule> nodules;
  for (int tries = 0; tries < 20000 && static_cast<int>(nodules.size()) < field.nodules; ++tries) {
    Nodule n{};
    n.radius = std::clamp(field.mean_radius * exact_exp(0.34 * draws.normal()), 5.0, 22.0);
    n.x = draws.uniform(-8, kSize + 8);
    n.y = draws.uniform(-8, kSize + 8);
    const double dx = draws.normal(), dy = draws.normal();
    const double length = std::sqrt(dx * dx + dy * dy);
    n.ux = dx / length;
    n.uy = dy / length;
    n.stretch = draws.uniform(1.0, 1.12);
    n.halo = n.radius * draws.uniform(0.35, 0.8);
    n.outline = draws.bits();
    const bool free = std::none_of(nodules.begin(), nodules.end(), [&](const Nodule& other) {
      const double gap = 1.3 * (n.radius + other.radius) + 4;
      const double ex = n.x - other.x, ey = n.y - other.y;
      return ex * ex + ey * ey < gap * gap;
    });
    if (free) nodules.push_back(n);
  }
  return nodules;
}

// Where pearlite would like to be. The lattices are turned against the picture and bent, or their
// axes would show in the outlines.
struct Texture {
  SmoothField big, small, bend;
  double at(double x, double y) const {
    const double u = x + 9 * bend.at(x, y), v = y + 9 * bend.at(y + 4000, x);
    return big.at(0.8 * u - 0.6 * v, 0.6 * u + 0.8 * v) +
           0.4 * small.at(0.28 * u - 0.96 * v, 0.96 * u + 0.28 * v);
  }
};

std::uint8_t phase_at(const std::vector<Nodule>& nodules, double threshold, const Texture& texture,
                      int x, int y) {
  bool in_halo = false;
  for (const Nodule& n : nodules) {
    const double reach = 2.3 * n.radius + 6;
    if (std::abs(x - n.x) > reach || std::abs(y - n.y) > reach) continue;
    const double distance = outside(n, x, y);
    if (distance < 0) return 1;
    in_halo = in_halo || distance < n.halo;
  }
  return !in_halo && texture.at(x, y) > threshold ? 2 : 3;
}

Picture cast_iron(const Field& field, std::uint64_t seed, int number) {
  Draws draws(seed, 100u + static_cast<std::uint64_t>(number));
  const std::vector<Nodule> nodules = throw_nodules(field, draws);
  const std::uint64_t key = draws.bits();
  const Texture texture{SmoothField(key, 46), SmoothField(key + 1, 15), SmoothField(key + 2, 28)};

  Volume<std::uint8_t> truth({kSize, kSize});
  Volume<float> clean({kSize, kSize});
  for (int y = 0; y < kSize; ++y) {
    for (int x = 0; x < kSize; ++x) {
      truth.at(x, y) = phase_at(nodules, field.pearlite, texture, x, y);
      clean.at(x, y) = static_cast<float>(kBrightness[truth.at(x, y) - 1]);
    }
  }
  blur(clean, kBlur);

  Volume<std::uint16_t> page({kSize, kSize});
  for (int y = 0; y < kSize; ++y) {
    for (int x = 0; x < kSize; ++x) {
      page.at(x, y) = quantised(clean.at(x, y) + kNoise * draws.normal(), 8);
    }
  }
  Picture picture{"cast-iron", field.name, 3, 8, {}, {}};
  picture.pages.push_back(std::move(page));
  picture.truth.push_back(std::move(truth));
  return picture;
}

}  // namespace

std::vector<Picture> cast_iron_pictures(std::uint64_t seed) {
  const Field fields[] = {{"heat-0417-specimen-A-field-1", 62, 12.0, 0.05},
                          {"heat-0417-specimen-A-field-2", 58, 12.0, 0.05},
                          {"heat-0417-specimen-B-field-1", 64, 11.5, 0.00},
                          {"heat-0422-specimen-A-field-1", 96, 9.0, 0.30},
                          {"heat-0422-specimen-A-field-2", 90, 9.0, 0.30}};
  std::vector<Picture> pictures;
  for (const Field& field : fields) {
    pictures.push_back(cast_iron(field, seed, static_cast<int>(pictures.size())));
  }
  return pictures;
}

}  // namespace stillfield::generate
