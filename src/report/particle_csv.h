// Tables of particles: one image's, and those of a run together.
//
// Columns  docs/outputs.md; lengths in micrometres where the pixel size is known, else in pixels,
//          areas in the square of that unit; positions always in pixels of the image
#ifndef STILLFIELD_REPORT_PARTICLE_CSV_H_
#define STILLFIELD_REPORT_PARTICLE_CSV_H_

#include <span>
#include <string>
#include <string_view>

#include "measure/particle_table.h"
#include "report/record.h"

namespace stillfield {

inline constexpr char kParticlesSuffix[] = ".particles.csv";

// `pixel_size_um` NaN: unknown.
std::string particles_csv(const InputFacts& input, double pixel_size_um,
                          std::span<const ParticleRow> rows);

// A table without particles, and the rows of a table, to put those of images one after the other.
std::string particles_header();
std::string_view particle_rows(std::string_view table);

}  // namespace stillfield

#endif  // STILLFIELD_REPORT_PARTICLE_CSV_H_
