#include "study/class_fields.h"

#include <algorithm>
#include <cmath>
#include <stdexcept>

#include "random/stream.h"

namespace stillfield::study {
namespace {

constexpr double kSmallestShare = 0.05;

using Plane = std::vector<double>;  // side * side, row by row

// Gaussian blur, reflected at the border.
void smooth(Plane& plane, int side, double sd) {
  const int reach = static_cast<int>(std::ceil(3.0 * sd));
  std::vector<double> kernel(static_cast<std::size_t>(reach) + 1);
  double total = 0.0;
  for (int i = -reach; i <= reach; ++i) total += std::exp(-0.5 * i * i / (sd * sd));
  for (int i = 0; i <= reach; ++i) {
    kernel[static_cast<std::size_t>(i)] = std::exp(-0.5 * i * i / (sd * sd)) / total;
  }
  const auto reflected = [side](int i) {
    return i < 0 ? -1 - i : i >= side ? 2 * side - 1 - i : i;
  };
  for (const bool along_x : {true, false}) {
    const Plane in = plane;
    for (int y = 0; y < side; ++y) {
      for (int x = 0; x < side; ++x) {
        double sum = 0.0;
        for (int i = -reach; i <= reach; ++i) {
          const int u = along_x ? reflected(x + i) : x, v = along_x ? y : reflected(y + i);
          sum += kernel[static_cast<std::size_t>(std::abs(i))] *
                 in[static_cast<std::size_t>(v * side + u)];
        }
        plane[static_cast<std::size_t>(y * side + x)] = sum;
      }
    }
  }
}

// Shares that add to 1, each at least kSmallestShare, the rest divided at random.
std::vector<double> random_shares(int classes, RandomStream& random) {
  std::vector<double> share(static_cast<std::size_t>(classes));
  double total = 0.0;
  for (double& s : share) total += s = random.gamma(1.0);
  for (double& s : share) s = kSmallestShare + (1.0 - classes * kSmallestShare) * s / total;
  return share;
}

int draw_class(const std::vector<double>& share, RandomStream& random) {
  double u = random.uniform();
  for (std::size_t k = 0; k + 1 < share.size(); ++k) {
    if (u < share[k]) return static_cast<int>(k);
    u -= share[k];
  }
  return static_cast<int>(share.size()) - 1;
}

using Labels = Volume<std::uint8_t>;

void draw_disks(const std::vector<double>& share, RandomStream& random, Labels& labels) {
  const int side = labels.width();
  const auto largest = std::max_element(share.begin(), share.end()) - share.begin();
  for (int y = 0; y < side; ++y) {
    std::fill_n(labels.row(y), side, static_cast<std::uint8_t>(largest));
  }
  // Enough disks to cover the field 1.2 times, each of a random class.
  double covered = 0.0;
  while (covered < 1.2 * side * side) {
    const int k = draw_class(share, random);
    const double radius = 4.0 + 12.0 * random.uniform();
    const double cx = side * random.uniform(), cy = side * random.uniform();
    covered += 3.14159 * radius * radius;
    for (int y = 0; y < side; ++y) {
      for (int x = 0; x < side; ++x) {
        const double dx = x + 0.5 - cx, dy = y + 0.5 - cy;
        if (dx * dx + dy * dy <= radius * radius) labels.at(x, y) = static_cast<std::uint8_t>(k);
      }
    }
  }
}

void draw_cells(const std::vector<double>& share, RandomStream& random, Labels& labels) {
  const int side = labels.width();
  struct Seed {
    double x, y;
    int k;
  };
  std::vector<Seed> seeds(static_cast<std::size_t>(side * side / 300));
  for (Seed& s : seeds) {
    s = {side * random.uniform(), side * random.uniform(), draw_class(share, random)};
  }
  for (int y = 0; y < side; ++y) {
    for (int x = 0; x < side; ++x) {
      double least = 1e300;
      for (const Seed& s : seeds) {
        const double d = (x - s.x) * (x - s.x) + (y - s.y) * (y - s.y);
        if (d >= least) continue;
        least = d;
        labels.at(x, y) = static_cast<std::uint8_t>(s.k);
      }
    }
  }
}

void draw_blobs(const std::vector<double>& share, RandomStream& random, Labels& labels) {
  const int side = labels.width();
  Plane plane(static_cast<std::size_t>(side * side));
  for (double& v : plane) v = random.normal();
  smooth(plane, side, 5.0);
  Plane sorted = plane;
  std::sort(sorted.begin(), sorted.end());
  std::vector<double> limit;
  double below = 0.0;
  for (const double s : share) {
    below += s;
    limit.push_back(sorted[std::min(
        sorted.size() - 1, static_cast<std::size_t>(below * static_cast<double>(sorted.size())))]);
  }
  for (int y = 0; y < side; ++y) {
    for (int x = 0; x < side; ++x) {
      const double v = plane[static_cast<std::size_t>(y * side + x)];
      std::size_t k = 0;
      while (k + 1 < share.size() && v >= limit[k]) ++k;
      labels.at(x, y) = static_cast<std::uint8_t>(k);
    }
  }
}

}  // namespace

ClassField draw_classes(const std::string& family, int side, int classes, std::uint64_t seed) {
  ClassField field{Labels({side, side}), {}};
  for (std::uint32_t attempt = 0;; ++attempt) {
    RandomStream random(chain_key(seed, 0), Purpose::kSimulation, attempt);
    const std::vector<double> share = random_shares(classes, random);
    if (family == "disks") {
      draw_disks(share, random, field.labels);
    } else if (family == "cells") {
      draw_cells(share, random, field.labels);
    } else if (family == "blobs") {
      draw_blobs(share, random, field.labels);
    } else {
      throw std::invalid_argument("no such family of shapes: " + family);
    }
    field.shares.assign(static_cast<std::size_t>(classes), 0.0);
    for (int y = 0; y < side; ++y) {
      for (int x = 0; x < side; ++x) field.shares[field.labels.at(x, y)] += 1.0 / (side * side);
    }
    if (*std::min_element(field.shares.begin(), field.shares.end()) >= 0.95 * kSmallestShare) {
      return field;
    }
  }
}

Volume<float> render_classes(const ClassField& field, double contrast, double blur,
                             std::uint64_t seed) {
  const int side = field.labels.width();
  Plane plane;
  for (int y = 0; y < side; ++y) {
    for (int x = 0; x < side; ++x) plane.push_back(contrast * field.labels.at(x, y));
  }
  if (blur > 0.0) smooth(plane, side, blur);
  RandomStream random(chain_key(seed, 1), Purpose::kSimulation, 1u << 30);
  Volume<float> image({side, side});
  for (int y = 0; y < side; ++y) {
    for (int x = 0; x < side; ++x) {
      image.at(x, y) =
          static_cast<float>(plane[static_cast<std::size_t>(y * side + x)] + random.normal());
    }
  }
  return image;
}

}  // namespace stillfield::study
