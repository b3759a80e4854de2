#include "model/neighbourhood.h"

#include <algorithm>
#include <cmath>
#include <cstdlib>

#include "core/error.h"

namespace stillfield {

double Neighbourhood::total_weight() const {
  double sum = 0.0;
  for (const NeighbourRing& ring : rings) {
    sum += ring.weight * static_cast<double>(ring.neighbours.size());
  }
  return sum;
}

Neighbourhood make_neighbourhood(Connectivity connectivity, double spacing_z) {
  if (!(spacing_z > 0.0)) {
    throw Error(ErrorKind::kUsage, "the distance between slices must be greater than 0");
  }
  const bool volume =
      connectivity == Connectivity::kSix || connectivity == Connectivity::kTwentySix;
  const bool faces_only = connectivity == Connectivity::kFour || connectivity == Connectivity::kSix;

  struct Candidate {
    double distance;
    Displacement d;
  };
  std::vector<Candidate> all;
  for (int z = volume ? -1 : 0; z <= (volume ? 1 : 0); ++z) {
    for (int y = -1; y <= 1; ++y) {
      for (int x = -1; x <= 1; ++x) {
        const int steps = std::abs(x) + std::abs(y) + std::abs(z);
        if (steps == 0 || (faces_only && steps > 1)) continue;
        const double dz = z * spacing_z;
        all.push_back({std::sqrt(x * x + y * y + dz * dz), {x, y, z}});
      }
    }
  }
  std::stable_sort(all.begin(), all.end(),
                   [](const Candidate& a, const Candidate& b) { return a.distance < b.distance; });

  Neighbourhood result{connectivity, {}};
  double last = -1.0;
  for (const Candidate& c : all) {
    if (c.distance != last) result.rings.push_back({all.front().distance / c.distance, {}});
    result.rings.back().neighbours.push_back(c.d);
    last = c.distance;
  }
  return result;
}

}  // namespace stillfield
