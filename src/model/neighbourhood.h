// Which pixels are neighbours, and how strongly they count.
//
// Weights   1 / distance, scaled so that the nearest neighbours weigh 1 (w_st of docs/maths.md)
// Shapes    4 and 8 neighbours in a plane; 6 and 26 in a volume, where `spacing_z` is the distance
//           between slices in units of the pixel size
#ifndef STILLFIELD_MODEL_NEIGHBOURHOOD_H_
#define STILLFIELD_MODEL_NEIGHBOURHOOD_H_

#include <array>
#include <vector>

namespace stillfield {

enum class Connectivity { kFour = 4, kEight = 8, kSix = 6, kTwentySix = 26 };

struct Displacement {
  int x, y, z;
};

// Neighbours at one distance.
struct NeighbourRing {
  double weight = 1.0;
  std::vector<Displacement> neighbours;
};

struct Neighbourhood {
  Connectivity connectivity = Connectivity::kFour;
  std::vector<NeighbourRing> rings;

  // Sum of the weights of all neighbours of an inner pixel.
  double total_weight() const;
};

// Throws Error(kUsage) unless spacing_z > 0.
Neighbourhood make_neighbourhood(Connectivity connectivity, double spacing_z = 1.0);

}  // namespace stillfield

#endif  // STILLFIELD_MODEL_NEIGHBOURHOOD_H_
