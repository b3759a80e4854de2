// Grey values that salt, pepper or stuck pixels have exactly.
//
// Rule     a value is an atom when at least kLeastImpulseShare of the pixels hold it, more than all
//          values within two steps around (of the noise floor, or of the usual difference between
//          successive values if that is larger), and they are scattered: not the clipped areas of a
//          picture
// Floor    the noise is taken to be at least kLeastShareOfRange of the grey range, about the step
// of
//          8 bits
#ifndef STILLFIELD_MODEL_IMPULSE_ATOMS_H_
#define STILLFIELD_MODEL_IMPULSE_ATOMS_H_

#include <cstdint>
#include <vector>

#include "core/volume.h"

namespace stillfield {

inline constexpr double kLeastImpulseShare = 0.005;
inline constexpr double kLeastShareOfRange = 0.004;

struct ImpulseAtoms {
  struct Atom {
    double grey = 0.0;
    double certainty = 0.0;  // share of its pixels that the values around do not account for
  };
  std::vector<Atom> list;
  double low = 0.0, high = 0.0;  // of all usable pixels

  double least_noise() const { return kLeastShareOfRange * (high - low); }
  // 0 for other values.
  double certainty(double grey) const {
    for (const Atom& atom : list) {
      if (atom.grey == grey) return atom.certainty;
    }
    return 0.0;
  }
};

ImpulseAtoms find_atoms(View<const float> image, View<const std::uint8_t> usable);

}  // namespace stillfield

#endif  // STILLFIELD_MODEL_IMPULSE_ATOMS_H_
