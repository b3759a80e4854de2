#include "measure/particles.h"

#include <algorithm>
#include <cmath>
#include <limits>
#include <numbers>
#include <opencv2/imgproc.hpp>

#include "measure/box_places.h"

namespace stillfield {
namespace {

cv::Mat class_mask(View<const std::uint8_t> labels, int label, View<const std::uint8_t> usable) {
  cv::Mat mask(labels.height(), labels.width(), CV_8UC1);
  const bool all = usable.extent().sites() == 0;
  for (int y = 0; y < labels.height(); ++y) {
    std::uint8_t* out = mask.ptr<std::uint8_t>(y);
    for (int x = 0; x < labels.width(); ++x) {
      out[x] = labels.at(x, y) == label && (all || usable.at(x, y) != 0) ? 1 : 0;
    }
  }
  return mask;
}

// Whether the box with a margin of one pixel leaves the frame or holds an unusable pixel.
bool touches_edge(const Particle& p, Extent frame, View<const std::uint8_t> usable) {
  if (p.left == 0 || p.top == 0 || p.left + p.width == frame.width ||
      p.top + p.height == frame.height) {
    return true;
  }
  if (usable.extent().sites() == 0) return false;
  for (int y = p.top - 1; y <= p.top + p.height; ++y) {
    const std::uint8_t* row = usable.row(y);
    if (std::find(row + p.left - 1, row + p.left + p.width + 1, 0) != row + p.left + p.width + 1) {
      return true;
    }
  }
  return false;
}

void weigh(View<const std::uint8_t> usable, Extent frame, std::vector<Particle>& list) {
  int widest = 0, highest = 0;
  for (Particle& p : list) {
    p.on_border = touches_edge(p, frame, usable);
    if (p.on_border) continue;
    widest = std::max(widest, p.width);
    highest = std::max(highest, p.height);
  }
  const BoxPlaces boxes(frame, usable, widest, highest);
  for (Particle& p : list) {
    if (p.on_border) continue;
    p.weight =
        static_cast<double>(boxes.area()) / static_cast<double>(boxes.places(p.width, p.height));
  }
}

Particle particle_of(int component, const cv::Mat& stats, const cv::Mat& centroids) {
  Particle p;
  p.area = stats.at<int>(component, cv::CC_STAT_AREA);
  p.left = stats.at<int>(component, cv::CC_STAT_LEFT);
  p.top = stats.at<int>(component, cv::CC_STAT_TOP);
  p.width = stats.at<int>(component, cv::CC_STAT_WIDTH);
  p.height = stats.at<int>(component, cv::CC_STAT_HEIGHT);
  p.x = centroids.at<double>(component, 0);
  p.y = centroids.at<double>(component, 1);
  return p;
}

}  // namespace

Particles find_particles(View<const std::uint8_t> labels, int label,
                         View<const std::uint8_t> usable, const ParticleSettings& settings) {
  Particles found;
  found.component = Volume<std::int32_t>({labels.width(), labels.height()});
  cv::Mat component, stats, centroids;
  const int count =
      cv::connectedComponentsWithStats(class_mask(labels, label, usable), component, stats,
                                       centroids, settings.connectivity, CV_32S);
  // OpenCV's own order depends on its method: components are numbered as their pixels are met.
  constexpr std::int32_t kUnmet = -1;
  std::vector<std::int32_t> number(static_cast<std::size_t>(count), kUnmet);
  number[0] = 0;
  for (int y = 0; y < labels.height(); ++y) {
    const std::int32_t* in = component.ptr<std::int32_t>(y);
    std::int32_t* out = found.component.row(y);
    for (int x = 0; x < labels.width(); ++x) {
      std::int32_t& n = number[static_cast<std::size_t>(in[x])];
      if (n == kUnmet) {
        Particle p = particle_of(in[x], stats, centroids);
        const bool counts = p.area >= settings.min_area;
        n = p.component = counts ? static_cast<int>(found.list.size()) + 1 : 0;
        if (counts) found.list.push_back(p);
      }
      out[x] = n;
    }
  }
  weigh(usable, labels.extent(), found.list);
  return found;
}

double equivalent_diameter(double area) {
  return std::sqrt(4.0 * area / std::numbers::pi);
}

ParticleSizes particle_sizes(const std::vector<Particle>& particles) {
  ParticleSizes sizes;
  std::vector<std::pair<std::int64_t, double>> areas;
  double area_sum = 0;
  for (const Particle& p : particles) {
    if (p.weight <= 0) continue;
    areas.emplace_back(p.area, p.weight);
    sizes.count += p.weight;
    area_sum += p.weight * static_cast<double>(p.area);
  }
  if (areas.empty()) {
    sizes.mean_area = sizes.d10 = sizes.d50 = sizes.d90 = std::numeric_limits<double>::quiet_NaN();
    return sizes;
  }
  sizes.mean_area = area_sum / sizes.count;
  std::sort(areas.begin(), areas.end());
  // The smallest diameter that at least this share of the weight does not exceed.
  const auto percentile = [&](double share) {
    double below = 0;
    for (const auto& [area, weight] : areas) {
      below += weight;
      if (below >= share * sizes.count * (1 - 1e-12)) {
        return equivalent_diameter(static_cast<double>(area));
      }
    }
    return equivalent_diameter(static_cast<double>(areas.back().first));
  };
  sizes.d10 = percentile(0.1);
  sizes.d50 = percentile(0.5);
  sizes.d90 = percentile(0.9);
  return sizes;
}

}  // namespace stillfield
