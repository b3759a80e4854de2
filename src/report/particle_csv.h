// Tables of particles: one image's, and those of a run together.
//
// Columns  docs/outputs.md; lengths in micrometres where the pixel size is known, else in pixels,
//          areas in the square of that unit; positions always in pixels of the image
#ifndef STILLFIELD_REPORT_PARTICLE_CSV_H_
#define STILLFIELD_REPORT_PARTICLE_CSV_H_

#include <span>
#include <string>

#include "measure/particle_table.h"
#include "report/record.h"

namespace stillfield {

inline constexpr char kParticlesSuffix[] = ".particles.csv";

// `pixel_size_um` NaN: unknown.
std::string particles_csv(const InputFacts& input, double pixel_size_um,
                          std::span<const ParticleRow> rows);

// Tables of images one after the other under one header.
std::string joined_particles_csv(std::span<const std::string> tables);

}  // namespace stillfield

#endif  // STILLFIELD_REPORT_PARTICLE_CSV_H_
