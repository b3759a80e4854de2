#include "study/shapes.h"

#include <algorithm>
#include <cmath>
#include <numbers>
#include <vector>

#include "random/stream.h"

namespace stillfield::study {
namespace {

double between(RandomStream& random, double low, double high) {
  return low + (high - low) * random.uniform();
}

// At least `low` and less than `high` to a field of 128^2.
int number_of_shapes(RandomStream& random, int low, int high, int side) {
  const double area = side * side / (128.0 * 128.0);
  return std::max(3, static_cast<int>(between(random, low, high) * area));
}

void draw_disk(double radius, double cx, double cy, Volume<std::uint8_t>& labels) {
  for (int y = 0; y < labels.height(); ++y) {
    for (int x = 0; x < labels.width(); ++x) {
      const double dx = x + 0.5 - cx, dy = y + 0.5 - cy;
      if (dx * dx + dy * dy <= radius * radius) labels.at(x, y) = 2;
    }
  }
}

void draw_stroke(double width, double length, double angle, double cx, double cy,
                 Volume<std::uint8_t>& labels) {
  const double ux = std::cos(angle), uy = std::sin(angle);
  for (int y = 0; y < labels.height(); ++y) {
    for (int x = 0; x < labels.width(); ++x) {
      const double dx = x + 0.5 - cx, dy = y + 0.5 - cy;
      const double along = dx * ux + dy * uy, across = dx * uy - dy * ux;
      if (std::fabs(along) <= length / 2 && std::fabs(across) <= width / 2) labels.at(x, y) = 2;
    }
  }
}

void draw_blobs(RandomStream& random, Volume<std::uint8_t>& labels) {
  const Extent e = labels.extent();
  Volume<double> noise(e);
  for (int y = 0; y < e.height; ++y) {
    for (int x = 0; x < e.width; ++x) noise.at(x, y) = random.normal();
  }
  const Volume<double> smooth = gaussian_blur(noise, between(random, 2.5, 4.0));
  std::vector<double> sorted;
  for (int y = 0; y < e.height; ++y)
    sorted.insert(sorted.end(), smooth.row(y), smooth.row(y) + e.width);
  const auto rank =
      static_cast<std::ptrdiff_t>(between(random, 0.65, 0.80) * static_cast<double>(sorted.size()));
  std::nth_element(sorted.begin(), sorted.begin() + rank, sorted.end());
  const double level = sorted[static_cast<std::size_t>(rank)];
  for (int y = 0; y < e.height; ++y) {
    for (int x = 0; x < e.width; ++x) labels.at(x, y) = smooth.at(x, y) > level ? 2 : 1;
  }
}

void draw_polygons(RandomStream& random, Volume<std::uint8_t>& labels) {
  constexpr double kCell = 17.0;
  struct Seed {
    double x, y;
    bool kept;
  };
  const int side = labels.width();
  const int across = static_cast<int>(side / kCell) + 2;
  std::vector<Seed> seeds;
  for (int j = -1; j < across; ++j) {
    for (int i = -1; i < across; ++i) {
      const double x = (i + between(random, 0.15, 0.85)) * kCell;
      const double y = (j + between(random, 0.15, 0.85)) * kCell;
      seeds.push_back({x, y, random.uniform() < 0.4});
    }
  }
  const double gap = between(random, 3.0, 5.0);
  for (int y = 0; y < side; ++y) {
    for (int x = 0; x < side; ++x) {
      const auto squared = [&](const Seed& s) {
        const double dx = x + 0.5 - s.x, dy = y + 0.5 - s.y;
        return dx * dx + dy * dy;
      };
      const Seed* nearest = &seeds.front();
      for (const Seed& s : seeds) {
        if (squared(s) < squared(*nearest)) nearest = &s;
      }
      bool inside = nearest->kept;
      for (const Seed& s : seeds) {
        if (&s == nearest) continue;
        // Distance to the border between the two cells.
        const double apart = std::hypot(s.x - nearest->x, s.y - nearest->y);
        if ((squared(s) - squared(*nearest)) / (2 * apart) < gap / 2) inside = false;
      }
      labels.at(x, y) = inside ? 2 : 1;
    }
  }
}

}  // namespace

Volume<double> gaussian_blur(const Volume<double>& image, double sd) {
  if (sd <= 0) {
    Volume<double> same(image.extent());
    for (int y = 0; y < image.height(); ++y) std::copy_n(image.row(y), image.width(), same.row(y));
    return same;
  }
  const int reach = static_cast<int>(std::ceil(4 * sd));
  std::vector<double> weight;
  double sum = 0;
  for (int i = -reach; i <= reach; ++i) weight.push_back(std::exp(-0.5 * i * i / (sd * sd)));
  for (const double w : weight) sum += w;
  const auto mirror = [](int i, int n) {
    if (i < 0) i = -1 - i;
    if (i >= n) i = 2 * n - 1 - i;
    return std::clamp(i, 0, n - 1);
  };
  const int width = image.width(), height = image.height();
  Volume<double> rows(image.extent()), out(image.extent());
  for (int y = 0; y < height; ++y) {
    for (int x = 0; x < width; ++x) {
      double v = 0;
      for (int i = -reach; i <= reach; ++i) {
        v += weight[static_cast<std::size_t>(i + reach)] * image.at(mirror(x + i, width), y);
      }
      rows.at(x, y) = v / sum;
    }
  }
  for (int y = 0; y < height; ++y) {
    for (int x = 0; x < width; ++x) {
      double v = 0;
      for (int i = -reach; i <= reach; ++i) {
        v += weight[static_cast<std::size_t>(i + reach)] * rows.at(x, mirror(y + i, height));
      }
      out.at(x, y) = v / sum;
    }
  }
  return out;
}

Volume<std::uint8_t> draw_shapes(Family family, int side, std::uint64_t seed) {
  RandomStream random(chain_key(seed, 0), Purpose::kSimulation, 2,
                      static_cast<std::uint32_t>(family));
  Volume<std::uint8_t> labels({side, side});
  for (int y = 0; y < side; ++y) std::fill_n(labels.row(y), side, std::uint8_t{1});
  if (family == Family::kDisks) {
    const int count = number_of_shapes(random, 8, 18, side);
    for (int i = 0; i < count; ++i) {
      const double radius = between(random, 3, 14);
      const double cx = side * random.uniform(), cy = side * random.uniform();
      draw_disk(radius, cx, cy, labels);
    }
  } else if (family == Family::kBlobs) {
    draw_blobs(random, labels);
  } else if (family == Family::kLines) {
    const int count = number_of_shapes(random, 6, 14, side);
    for (int i = 0; i < count; ++i) {
      const double width = between(random, 3, 5), length = between(random, 20, 60);
      const double angle = between(random, 0, std::numbers::pi);
      const double cx = side * random.uniform(), cy = side * random.uniform();
      draw_stroke(width, length, angle, cx, cy, labels);
    }
  } else {
    draw_polygons(random, labels);
  }
  return labels;
}

Volume<float> photograph(const Volume<std::uint8_t>& labels, double blur, double sigma,
                         std::uint64_t seed) {
  RandomStream random(chain_key(seed, 1), Purpose::kSimulation, 2);
  const Extent e = labels.extent();
  Volume<double> clean(e);
  for (int y = 0; y < e.height; ++y) {
    for (int x = 0; x < e.width; ++x) clean.at(x, y) = labels.at(x, y) - 1;
  }
  clean = gaussian_blur(clean, blur);
  Volume<float> image(e);
  for (int y = 0; y < e.height; ++y) {
    for (int x = 0; x < e.width; ++x) {
      image.at(x, y) = static_cast<float>(clean.at(x, y) + sigma * random.normal());
    }
  }
  return image;
}

}  // namespace stillfield::study
